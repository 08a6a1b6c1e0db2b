import type { Chain, Model } from '../../src/model/model.ts';
import type { RandomStream } from '../../src/numeric/random.ts';
import type { Take, TakeSet } from '../../src/takes/take-set.ts';
import { smoothSeries } from '../numeric/smooth-series.ts';

/** One take to be: two units by number, and what the ladder looks at. */
export interface Plan {
  readonly emitter: number;
  readonly receiver: number;
  readonly seating?: string;
  readonly session?: string;
  readonly gain?: number;
}

export interface Scatter {
  readonly repeat: number;
  readonly reseat: number;
  readonly partner: number;
}

/** The model and takes of a plan; levels in dB, a row a take. */
export function bench(
  plans: readonly Plan[],
  levels: readonly ArrayLike<number>[],
  frequencies: readonly number[],
  kind: 'reciprocal' | 'directional' = 'reciprocal',
): { set: TakeSet; model: Model } {
  const units = Math.max(...plans.flatMap((plan) => [plan.emitter, plan.receiver])) + 1;
  const gains = Math.max(-1, ...plans.map((plan) => plan.gain ?? -1)) + 1;
  const perFrequency = kind === 'reciprocal' ? units : 2 * units;
  const takes = plans.map(
    (plan, t): Take => ({
      id: `T${t + 1}`,
      file: 'bench.csv',
      line: t + 2,
      emitter: `N${plan.emitter}`,
      receiver: `N${plan.receiver}`,
      path: '',
      session: plan.session ?? '',
      emitterMount: '',
      receiverMount: '',
      emitterSeating: plan.seating ?? '',
      receiverSeating: plan.seating ?? '',
      repeat: '',
      takenAt: '',
      distance: undefined,
      note: '',
    }),
  );
  const chains = plans.map((plan): Chain => {
    const ends = [plan.emitter, kind === 'reciprocal' ? plan.receiver : units + plan.receiver];
    const links = plan.gain === undefined ? ends : [...ends, perFrequency + plan.gain];
    return { links, factors: links.map(() => 1), known: undefined };
  });
  const width = frequencies.length;
  const table = new Float64Array(plans.length * width);
  levels.forEach((row, t) => {
    table.set(Array.from(row), t * width);
  });
  return {
    set: {
      takes,
      frequencies: Float64Array.from(frequencies),
      levels: table,
      uncertainty: undefined,
      grid: { kind: 'as measured' },
      unused: [],
      notices: [],
    },
    model: {
      choice: { kind, reason: '' },
      links: [
        ...Array.from({ length: perFrequency }, (_, l) => ({
          name: `link ${l}`,
          kind: 'response' as const,
          scope: 'each frequency' as const,
          prior: undefined,
        })),
        ...Array.from({ length: gains }, (_, g) => ({
          name: `gain ${g}`,
          kind: 'gain' as const,
          scope: 'all frequencies' as const,
          prior: undefined,
        })),
      ],
      linksPerFrequency: perFrequency,
      chains,
      responses: Array.from({ length: perFrequency }, (_, l) => ({
        unit: `N${l % units}`,
        mount: '',
        role: kind === 'reciprocal' ? 'both' : l < units ? 'emit' : 'receive',
        link: l,
        offset: undefined,
      })),
      datum: 'strict',
    },
  };
}

/** Every pair of the units, with `seatings(pair)` seatings and `repeats(pair, seating)` takes in each. */
export function allPairs(
  units: number,
  seatings: (pair: number) => number,
  repeats: (pair: number, seating: number) => number,
): Plan[] {
  const plans: Plan[] = [];
  let pair = 0;
  for (let i = 0; i < units; i++) {
    for (let j = i + 1; j < units; j++) {
      for (let s = 0; s < seatings(pair); s++) {
        for (let k = 0; k < repeats(pair, s); k++) plans.push({ emitter: i, receiver: j, seating: `${s + 1}` });
      }
      pair++;
    }
  }
  return plans;
}

/**
 * Levels of a plan whose scatter is known, all of it correlated along frequency over `width` neighbours (repeat noise of
 * width 0 where `whiteRepeats`).
 */
export function simulatedLevels(
  stream: RandomStream,
  plans: readonly Plan[],
  count: number,
  scatter: Scatter,
  width: number,
  whiteRepeats = false,
): Float64Array[] {
  const drawn = new Map<string, Float64Array>();
  const series = (key: string, deviation: number) => {
    const known = drawn.get(key) ?? smoothSeries(stream, count, width).map((value) => deviation * value);
    drawn.set(key, known);
    return known;
  };
  return plans.map(({ emitter, receiver, seating = '' }) => {
    const pair = `${Math.min(emitter, receiver)} ${Math.max(emitter, receiver)}`;
    const ofPair = scatter.partner > 0 ? series(pair, scatter.partner) : undefined;
    const ofSeating = scatter.reseat > 0 ? series(`${pair} ${seating}`, scatter.reseat) : undefined;
    return smoothSeries(stream, count, whiteRepeats ? 0 : width).map(
      (value, f) => scatter.repeat * value + (ofPair?.[f] ?? 0) + (ofSeating?.[f] ?? 0),
    );
  });
}
