import type { Readings, TakeHeader } from '../../src/readings/readings.ts';

/** One take's rows: [frequency, level, u] each; what is left out of the header is 'not given'. */
export interface TakeRows extends Partial<TakeHeader> {
  readonly rows: readonly (readonly [number, number, number?])[];
}

/** Readings as reading leaves them, row after row in the order of the takes. */
export function readingsMade(takes: readonly TakeRows[]): Readings {
  const rows = takes.flatMap(({ rows }, take) => rows.map(([frequency, level, u]) => ({ take, frequency, level, u })));
  const withU = rows.some(({ u }) => u !== undefined);
  return {
    files: [{ name: 'bench.csv', layout: 'long', sha256: '', bytes: 0, rows: rows.length }],
    takes: takes.map(({ rows: _, ...header }) => ({
      file: 'bench.csv',
      line: 2,
      emitter: 'A',
      receiver: 'B',
      path: '',
      session: '',
      emitterMount: '',
      receiverMount: '',
      emitterSeating: '',
      receiverSeating: '',
      repeat: '',
      takenAt: '',
      distance: undefined,
      note: '',
      ...header,
    })),
    count: rows.length,
    take: Int32Array.from(rows, ({ take }) => take),
    frequency: Float64Array.from(rows, ({ frequency }) => frequency),
    level: Float64Array.from(rows, ({ level }) => level),
    line: Int32Array.from(rows, (_, i) => i + 2),
    uncertainty: withU ? Float64Array.from(rows, ({ u }) => u ?? Number.NaN) : undefined,
    averages: undefined,
    coherence: undefined,
    noise: undefined,
    unused: [],
    notices: [],
  };
}
