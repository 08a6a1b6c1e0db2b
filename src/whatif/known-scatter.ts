import { meansOfSeats } from '../estimate/fitted-level.ts';
import type { LevelScatter } from '../estimate/scatter-of-level.ts';
import { refitLevel } from '../estimate/scatter-of-level.ts';
import type { AssumedBand } from './assumed-scatter.ts';
import type { PlannedBench } from './planned-bench.ts';

/** Variance (dB²) that stands for none at all: the solver takes the same for rounding. */
const ROUNDING = 1e-12;

/**
 * The scatter of a design as the solver would hold it after a run, were it known: every unit has half of a pair's
 * reseat and partner variance.
 */
export function knownScatter(
  { set, model, layout }: Pick<PlannedBench, 'set' | 'model' | 'layout'>,
  { repeat, reseat, partner }: Pick<AssumedBand, 'repeat' | 'reseat' | 'partner'>,
): LevelScatter {
  const n = model.linksPerFrequency;
  const takes = set.takes.map(() => true);
  const deviations = {
    values: new Float64Array(takes.length),
    columns: 1,
    present: takes,
    active: takes,
    givenVariance: new Float64Array(takes.length),
  };
  const half = (deviation: number) => ({
    shares: new Float64Array(n).fill(deviation ** 2 / 2),
    dof: new Float64Array(n).fill(Number.POSITIVE_INFINITY),
  });
  const takeVariance = new Float64Array(takes.length).fill(Math.max(ROUNDING, repeat ** 2));
  const known: LevelScatter = {
    repeatVariance: takeVariance[0]!,
    takeVariance,
    repeatDof: Number.POSITIVE_INFINITY,
    seating: half(reseat),
    partner: half(partner),
    partnerDof: 0,
    isKnown: true,
    fitted: meansOfSeats(layout, deviations, takeVariance),
    deviations,
  };
  return refitLevel(layout, n, known, takes);
}
