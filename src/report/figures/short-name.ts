import { visible } from '../text-layout.ts';

/** A name that fits into so many characters; its end is cut where it does not, since tables and legends have the whole. */
export function shortName(name: string, most: number): string {
  const characters = [...visible(name)];
  return characters.length <= most ? characters.join('') : `${characters.slice(0, most - 1).join('')}…`;
}
