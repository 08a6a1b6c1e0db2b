/** Frequencies that differ by less than this part are one and the same: unit conversion leaves the last bits open. */
export const SAME_FREQUENCY = 1e-9;

/** The different frequencies among `values`, ascending, and for each value the index of its frequency. */
export interface FrequencyTable {
  /** Hertz. */
  readonly frequencies: Float64Array;
  readonly indexOf: Int32Array;
}

/** Brings frequencies together that are equal but for rounding. */
export function frequencyTable(values: Float64Array): FrequencyTable {
  const provisional = new Map<number, number>();
  const provisionalOf = new Int32Array(values.length);
  const distinct: number[] = [];
  // Takes mostly repeat one ascending grid, so the frequency after the last one is tried before the table.
  let guess = 0;
  for (let i = 0; i < values.length; i++) {
    const value = values[i]!;
    if (distinct[guess] !== value) {
      const known = provisional.get(value);
      if (known === undefined) {
        guess = distinct.length;
        provisional.set(value, guess);
        distinct.push(value);
      } else guess = known;
    }
    provisionalOf[i] = guess;
    guess++;
  }
  const ascending = [...distinct.keys()].sort((a, b) => distinct[a]! - distinct[b]!);
  const finalOf = new Int32Array(distinct.length);
  const frequencies: number[] = [];
  for (const index of ascending) {
    const value = distinct[index]!;
    const last = frequencies.at(-1);
    if (last === undefined || value - last > SAME_FREQUENCY * value) frequencies.push(value);
    finalOf[index] = frequencies.length - 1;
  }
  for (let i = 0; i < values.length; i++) provisionalOf[i] = finalOf[provisionalOf[i]!]!;
  return { frequencies: Float64Array.from(frequencies), indexOf: provisionalOf };
}
