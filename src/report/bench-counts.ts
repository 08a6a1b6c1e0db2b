import type { Model } from '../model/model.ts';
import type { TakeSet } from '../takes/take-set.ts';

/** How much there is of everything. */
export interface BenchCounts {
  readonly takes: number;
  readonly units: number;
  /** Emitter and receiver in this order; in the reciprocal model in either. */
  readonly pairs: number;
  readonly sessions: number;
  readonly frequencies: number;
  /** Lowest and highest frequency in hertz. */
  readonly from: number;
  readonly to: number;
}

export function benchCounts({ takes, frequencies }: TakeSet, model: Model): BenchCounts {
  const pairs = takes.map(({ emitter, receiver }) =>
    model.choice.kind === 'reciprocal' ? [emitter, receiver].sort() : [emitter, receiver],
  );
  return {
    takes: takes.length,
    units: unitsOf(takes).length,
    pairs: new Set(pairs.map((pair) => JSON.stringify(pair))).size,
    sessions: new Set(takes.map((take) => take.session)).size,
    frequencies: frequencies.length,
    from: frequencies[0]!,
    to: frequencies.at(-1)!,
  };
}

/** Units in the order they are first named. */
export function unitsOf(takes: TakeSet['takes']): string[] {
  return [...new Set(takes.flatMap((take) => [take.emitter, take.receiver]))];
}
