import type { InputFault } from '../quantity/input-fault.ts';
import type { Place } from '../quantity/place.ts';

/** Names listed in a message before it only counts the rest. */
const MOST_NAMES = 12;

/** The fault of naming a unit, in an option or a table given with it, that no take names. */
export function unknownUnit(place: Place, unit: string, known: Iterable<string>): InputFault {
  const names = [...new Set(known)];
  const more = names.length > MOST_NAMES ? ` and ${names.length - MOST_NAMES} more` : '';
  return {
    place,
    found: `the unit ${unit}, which no take names`,
    expected: `one of ${names.slice(0, MOST_NAMES).join(', ')}${more}`,
    remedy: 'Check its spelling against the files.',
  };
}
