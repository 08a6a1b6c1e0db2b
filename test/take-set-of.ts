import type { Take, TakeSet } from '../src/takes/take-set.ts';

/** One take of a set made for a test; what is left out is 'not given'. */
export interface TakeLine extends Partial<Omit<Take, 'id'>> {
  readonly emitter: string;
  readonly receiver: string;
  /** Decibels, one a frequency; NaN where not measured. */
  readonly levels: readonly number[];
  /** Standard uncertainty in dB of each of its readings. */
  readonly u?: number;
}

/** A take set as gathering makes it, from a few lines. */
export function takeSetOf(frequencies: readonly number[], lines: readonly TakeLine[]): TakeSet {
  const takes = lines.map(
    ({ levels: _, u: __, ...line }, t): Take => ({
      id: `T${String(t + 1).padStart(3, '0')}`,
      file: 'bench.csv',
      line: 2 + t * frequencies.length,
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
      ...line,
    }),
  );
  const hasUncertainty = lines.some((line) => line.u !== undefined);
  const perReading = (of: (line: TakeLine, f: number) => number) =>
    Float64Array.from(lines.flatMap((line) => frequencies.map((_, f) => of(line, f))));
  return {
    takes,
    frequencies: Float64Array.from(frequencies),
    levels: perReading((line, f) => line.levels[f] ?? Number.NaN),
    uncertainty: hasUncertainty ? perReading((line) => line.u ?? Number.NaN) : undefined,
    grid: { kind: 'as measured' },
    unused: [],
    notices: [],
  };
}

/** Lines of one frequency from `A>B`: level. */
export function pairsOf(levels: Readonly<Record<string, number>>, more: Partial<TakeLine> = {}): TakeLine[] {
  return Object.entries(levels).map(([pair, level]) => {
    const [emitter, receiver] = pair.split('>') as [string, string];
    return { emitter, receiver, levels: [level], ...more };
  });
}
