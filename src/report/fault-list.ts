import { faultText, type InputFault } from '../quantity/input-fault.ts';
import { visible } from './text-layout.ts';

/** Faults listed before the rest is only counted. */
const MOST_FAULTS = 20;

/** A line a fault, at most twenty, then how many more there are. A fault's text may hold the user's own; it stays on its line. */
export function faultList(faults: readonly InputFault[]): string {
  const lines = faults.slice(0, MOST_FAULTS).map((fault) => visible(faultText(fault)));
  const more = faults.length - lines.length;
  if (more > 0) lines.push(more === 1 ? 'and 1 more fault' : `and ${more} more faults`);
  return lines.map((line) => `${line}\n`).join('');
}
