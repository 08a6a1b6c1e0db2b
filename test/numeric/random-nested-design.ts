import type { NestedDesign } from '../../src/numeric/nested-anova.ts';
import { randomStream } from '../../src/numeric/random.ts';

/** A small unbalanced design of pair sums with a gain in some of the sessions, sparse and dense. */
export interface RandomDesign {
  readonly seed: number;
  readonly design: NestedDesign;
  readonly dense: number[][];
  /** Indicators of the groups. */
  readonly outer: number[][];
  readonly inner: number[][];
}

export function randomDesign(seed: number): RandomDesign {
  const stream = randomStream(seed);
  const units = 4 + stream.below(2);
  const gains = stream.below(3);
  const rows: { ends: [number, number]; gain: number; outer: number; inner: number }[] = [];
  let [outer, inner] = [0, 0];
  for (let i = 0; i < units; i++) {
    for (let j = i + 1; j < units; j++) {
      if (stream.uniform() < 0.1) continue;
      const seatings = 1 + stream.below(3);
      for (let s = 0; s < seatings; s++) {
        const repeats = 1 + stream.below(3);
        // A session may end between two repeats.
        for (let k = 0; k < repeats; k++) rows.push({ ends: [i, j], gain: stream.below(gains + 1), outer, inner });
        inner++;
      }
      outer++;
    }
  }
  const columns = units + gains;
  const entries = rows.map(({ ends, gain }) => [...ends, ...(gain < gains ? [units + gain] : [])]);
  const start = new Int32Array(rows.length + 1);
  entries.forEach((row, r) => {
    start[r + 1] = start[r]! + row.length;
  });
  const column = Int32Array.from(entries.flat());
  const indicator = (count: number, at: readonly number[]) =>
    Array.from({ length: count }, (_, k) => (at.includes(k) ? 1 : 0));
  return {
    seed,
    design: {
      fixed: { start, column, factor: new Float64Array(column.length).fill(1), columns },
      outer: Int32Array.from(rows, (row) => row.outer),
      inner: Int32Array.from(rows, (row) => row.inner),
    },
    dense: entries.map((row) => indicator(columns, row)),
    outer: rows.map((row) => indicator(outer, [row.outer])),
    inner: rows.map((row) => indicator(inner, [row.inner])),
  };
}
