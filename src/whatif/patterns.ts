import { type Design, seatingOf, type UnitPair } from './design.ts';

/**
 * - `all`: every pair once
 * - `ring`: each unit against the next, the last against the first
 * - `triangles`: three consecutive units against each other, each triangle sharing one unit with the next
 * - `hub`: the first unit against all others, and one pair of them that closes an odd loop
 * - `both-ways`: every pair in both directions
 */
export const PATTERNS = ['all', 'ring', 'triangles', 'hub', 'both-ways'] as const;
export type PatternName = (typeof PATTERNS)[number];

export interface PatternOptions {
  /** Times that each pair is mounted. */
  readonly seatings: number;
  /** Takes of each seating. */
  readonly repeats: number;
}

/** Fewest units that a pattern can be made of. */
export const FEWEST_UNITS = 2;

/** `S1` to `S6`; with leading zeros from ten on, so that names sort as they count. */
export function namedUnits(count: number): string[] {
  const digits = String(count).length;
  return Array.from({ length: count }, (_, i) => `S${String(i + 1).padStart(digits, '0')}`);
}

/**
 * The design that a phrase stands for.
 * @param units at least two.
 */
export function patternDesign(units: readonly string[], pattern: PatternName, options: PatternOptions): Design {
  const pairs = pairsOf(units, pattern);
  // Round by round: a pair that is mounted again comes after all others.
  const seatings = Array.from({ length: options.seatings }, () =>
    pairs.map(([emitter, receiver]) => seatingOf(emitter, receiver, { repeats: options.repeats })),
  ).flat();
  return { name: `${pattern}, ${units.length} units`, units, seatings, forbidden: [] };
}

/** A design of units alone, to which takes are to be added. */
export function emptyDesign(units: readonly string[]): Design {
  return { name: `${units.length} units`, units, seatings: [], forbidden: [] };
}

function pairsOf(units: readonly string[], pattern: PatternName): UnitPair[] {
  const all = units.flatMap((one, i) => units.slice(i + 1).map((other): UnitPair => [one, other]));
  switch (pattern) {
    case 'all':
      return all;
    case 'both-ways':
      return all.flatMap(([one, other]): UnitPair[] => [
        [one, other],
        [other, one],
      ]);
    case 'ring':
      // Of two units the way back would be the same pair.
      return units.length === 2 ? all : units.map((unit, i): UnitPair => [unit, units[(i + 1) % units.length]!]);
    case 'hub': {
      const [hub, ...others] = units as [string, ...string[]];
      const closing: UnitPair[] = others.length > 1 ? [[others[0]!, others[1]!]] : [];
      return [...others.map((other): UnitPair => [hub, other]), ...closing];
    }
    case 'triangles':
      return triangles(units);
  }
}

/** A unit left over at the end makes a triangle with the two before it. */
function triangles(units: readonly string[]): UnitPair[] {
  const found = new Map<string, UnitPair>();
  const add = (i: number, j: number) => {
    const pair: UnitPair = [units[i]!, units[j]!];
    found.set(`${i} ${j}`, pair);
  };
  if (units.length === 2) add(0, 1);
  for (let first = 0; first + 1 < units.length; first += 2) {
    const start = Math.min(first, units.length - 3);
    if (start < 0) break;
    add(start, start + 1);
    add(start + 1, start + 2);
    add(start, start + 2);
  }
  return [...found.values()];
}
