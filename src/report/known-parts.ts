import type { Model } from '../model/model.ts';
import type { Part, Pattern } from '../model/separability.ts';

/** A connected part of the bench with the frequencies at which it looks the same. Names as in `Link.name`. */
export interface NamedPart {
  readonly responses: readonly string[];
  readonly sides: readonly [readonly string[], readonly string[]] | undefined;
  /** Shortest odd loop in its order; a single name for a twin reading; absent where there is none. */
  readonly oddLoop: readonly string[] | undefined;
  /** Responses with a known value. */
  readonly known: readonly string[];
  /** Indices of frequencies, ascending. */
  readonly frequencies: readonly number[];
}

/** The connected parts of all patterns; the same part at several frequencies is one. */
export function namedParts(model: Model, patterns: readonly Pattern[]): NamedPart[] {
  const found = new Map<string, { part: Part; frequencies: number[] }>();
  for (const { separability, frequencies } of patterns) {
    for (const part of separability.parts) {
      const key = JSON.stringify([part.links, part.sides, part.oddLoop, part.known]);
      const same = found.get(key);
      if (same === undefined) found.set(key, { part, frequencies: [...frequencies] });
      else same.frequencies.push(...frequencies);
    }
  }
  const names = (links: readonly number[]) => links.map((link) => model.links[link]!.name);
  return [...found.values()].map(({ part, frequencies }) => ({
    responses: names(part.links),
    sides: part.sides && [names(part.sides[0]), names(part.sides[1])],
    oddLoop: part.oddLoop && names(part.oddLoop),
    known: names(part.known),
    frequencies: frequencies.sort((a, b) => a - b),
  }));
}
