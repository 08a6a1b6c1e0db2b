/** Results with findings put in their place, for tests of what is said about them. */
import type { TakeFinding } from '../../src/findings/examination.ts';
import type { Explanation, RankedExplanation } from '../../src/findings/explanations.ts';
import type { HoldFinding } from '../../src/findings/holds.ts';
import type { Result } from '../../src/report/result.ts';
import { type Example, resultOf } from './example-results.ts';

const NONE = Number.NaN;

export const MOVED_GAIN: Explanation = {
  kind: 'moved gain',
  shift: 3.08,
  uncertainty: 0.12,
  dof: Number.POSITIVE_INFINITY,
};

/** Explanations, all of them equally good but those after `likely`. */
export function explainedBy(
  explanations: readonly Explanation[],
  likely = explanations.length,
): TakeFinding['explained'] {
  const ranked = explanations.map(
    (explanation, place): RankedExplanation => ({
      explanation,
      behind: place,
      isEquallyGood: place < likely,
      curve: new Float64Array(),
    }),
  );
  return { take: 0, ranked, deviation: new Float64Array(), uncertainty: new Float64Array() };
}

export const FLAGGED: Omit<TakeFinding, 'take'> = {
  readings: 2,
  rmsResidual: 3,
  offset: 3.08,
  offsetUncertainty: 0.12,
  smallestShift: 0.5,
  worst: { from: 891, to: 1122, level: 3.5 },
  redundancy: NONE,
  pValue: 1e-9,
  verdict: 'flagged',
  isLeftOut: true,
  tiedWith: [],
  explained: explainedBy([MOVED_GAIN]),
  cure: undefined,
};

export const AGREES: Omit<TakeFinding, 'take'> = {
  ...FLAGGED,
  rmsResidual: 0.1,
  worst: { from: 891, to: 1122, level: 0.1 },
  redundancy: 0.5,
  pValue: 1,
  verdict: 'agrees',
  isLeftOut: false,
  explained: undefined,
};

export const HOLD: HoldFinding = {
  unit: 'A',
  mount: '',
  from: 891,
  to: 1122,
  partner: 0.1,
  low: 0,
  high: 0.4,
  pValue: 1,
  verdict: 'holds',
};

/** The result of an example with the findings of its first takes as given; all others agree. */
export async function judgedResult(
  example: Example,
  findings: readonly Omit<TakeFinding, 'take'>[],
  more: Partial<Result['examination']> = {},
): Promise<Result> {
  const result = await resultOf(example);
  const takes = result.set.takes.map((_, take) => ({ ...(findings[take] ?? AGREES), take }));
  return { ...result, examination: { ...result.examination, takes, ...more } };
}
