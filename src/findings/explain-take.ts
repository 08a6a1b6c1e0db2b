import type { Solution } from '../estimate/solution.ts';
import type { Model } from '../model/model.ts';
import type { TakeSet } from '../takes/take-set.ts';
import type { ExplainedTake, Explanation, RankedExplanation } from './explanations.ts';
import { bestBump } from './local-bump.ts';
import { otherChains } from './other-chains.ts';
import { EQUALLY_GOOD_RATIO } from './thresholds.ts';
import { fitShape, type WhitenedCurve } from './whitened-curve.ts';

/** A shift that is the same at all frequencies, in dB, with its standard uncertainty and degrees of freedom. */
export interface ConstantShift {
  readonly shift: number;
  readonly uncertainty: number;
  readonly dof: number;
}

/** What is known of the take's deviation from all that stands. */
export interface Deviation {
  /** Entry a frequency, in dB; NaN where not known. */
  readonly shift: Float64Array;
  readonly uncertainty: Float64Array;
  /** Correlation of neighbours along frequency of what is left in takes that agree. */
  readonly correlation: number;
  /** The constant shift of the screening, which weighs frequencies as it should. */
  readonly constant: ConstantShift | undefined;
}

/**
 * Ranks what the deviation of a take reads like, by the Bayesian information criterion (Schwarz 1978, Ann. Statist. 6,
 * 461–464) of the whitened deviation. Each explanation may leave more noise than agreeing takes have; a choice among m
 * candidates costs 2 ln m.
 * @param solution solved without the take.
 */
export function explainTake(
  set: TakeSet,
  model: Model,
  solution: Solution,
  take: number,
  deviation: Deviation,
): ExplainedTake {
  const { shift, uncertainty } = deviation;
  const width = shift.length;
  const used = [...shift.keys()].filter((f) => !Number.isNaN(shift[f]!));
  const x = Float64Array.from(set.frequencies, Math.log10);
  const curve: WhitenedCurve = { used, shift, uncertainty, correlation: deviation.correlation };
  const candidates: Candidate[] = [];
  const add = (explanation: Explanation, fit: { misfit: number }, parameters: number, predicted: Float64Array) => {
    candidates.push({ explanation, criterion: criterionOf(fit.misfit, used.length, parameters), curve: predicted });
  };

  // Known over all frequencies together only: nothing can be said of its shape.
  if (used.length === 0) return { take, ranked: asConstant(deviation.constant, width), deviation: shift, uncertainty };
  const nothing = fitShape(curve, []);
  add({ kind: 'scatter', factor: Math.sqrt(nothing.misfit / used.length) }, nothing, 0, new Float64Array(width));
  const one = new Float64Array(width).fill(1);
  const constant = fitShape(curve, [one]);
  add(
    movedGain(deviation.constant, constant),
    constant,
    1,
    one.map(() => constant.coefficients[0]!),
  );
  if (used.length >= FEWEST_FOR_SHAPES) {
    const centre = used.reduce((sum, f) => sum + x[f]!, 0) / used.length;
    const slope = fitShape(curve, [one, x.map((value) => value - centre)]);
    const [shiftAtCentre, perDecade] = slope.coefficients as [number, number];
    add(
      { kind: 'slope', perDecade, uncertainty: slope.uncertainties[1]!, shift: shiftAtCentre },
      slope,
      2,
      x.map((value) => shiftAtCentre + perDecade * (value - centre)),
    );
    const bump = bestBump(curve, set.frequencies);
    if (bump !== undefined) add(bump.explanation, bump, 3, bump.curve);
  }
  const others = otherChains(model, solution, set.takes[take]!, take, width);
  for (const other of others) {
    const known = other.curve.every((value, f) => !used.includes(f) || !Number.isNaN(value));
    if (!known) continue;
    const rest = { ...curve, shift: shift.map((value, f) => value - other.curve[f]!) };
    const penalty = (2 * Math.log(others.length)) / Math.log(Math.max(3, used.length));
    add(other.explanation, fitShape(rest, []), penalty, other.curve);
  }
  return { take, ranked: rank(candidates), deviation: shift, uncertainty };
}

function asConstant(constant: ConstantShift | undefined, width: number): RankedExplanation[] {
  if (constant === undefined || Number.isNaN(constant.shift)) return [];
  const { shift, uncertainty, dof } = constant;
  const explanation: Explanation = { kind: 'moved gain', shift, uncertainty, dof };
  return [{ explanation, behind: 0, isEquallyGood: true, curve: new Float64Array(width).fill(shift) }];
}

/** With fewer frequencies a shape along frequency means nothing. Common practice, no source. */
const FEWEST_FOR_SHAPES = 8;

interface Candidate {
  readonly explanation: Explanation;
  readonly criterion: number;
  readonly curve: Float64Array;
}

// −2 ln likelihood with the noise level free, but not below that of agreeing takes, plus the price of the parameters.
function criterionOf(misfit: number, count: number, parameters: number): number {
  const level = misfit / count;
  const deviance = level <= 1 ? misfit : count * (1 + Math.log(level));
  return deviance + parameters * Math.log(Math.max(3, count));
}

function movedGain(
  screened: ConstantShift | undefined,
  fit: { coefficients: readonly number[]; uncertainties: readonly number[] },
): Explanation {
  return screened === undefined || Number.isNaN(screened.shift)
    ? {
        kind: 'moved gain',
        shift: fit.coefficients[0]!,
        uncertainty: fit.uncertainties[0]!,
        dof: Number.POSITIVE_INFINITY,
      }
    : { kind: 'moved gain', shift: screened.shift, uncertainty: screened.uncertainty, dof: screened.dof };
}

/** Explanations that hold another one as a special case: such a one is no rival of it. */
const SPECIAL_CASES: Partial<Record<Explanation['kind'], readonly Explanation['kind'][]>> = {
  'moved gain': ['scatter'],
  slope: ['scatter', 'moved gain'],
  local: ['scatter'],
};

function rank(candidates: readonly Candidate[]): RankedExplanation[] {
  const within = 2 * Math.log(EQUALLY_GOOD_RATIO);
  const sorted = [...candidates].sort((a, b) => a.criterion - b.criterion);
  // A special case that does nearly as well as the best says more with less: it comes first.
  const simpler = sorted.find(
    ({ explanation, criterion }) =>
      SPECIAL_CASES[sorted[0]!.explanation.kind]?.includes(explanation.kind) &&
      criterion - sorted[0]!.criterion < within,
  );
  const best = simpler ?? sorted[0]!;
  const ordered = [best, ...sorted.filter((candidate) => candidate !== best)];
  return ordered.map(({ explanation, criterion, curve }) => ({
    explanation,
    behind: criterion - best.criterion,
    isEquallyGood:
      criterion - best.criterion < within && !SPECIAL_CASES[explanation.kind]?.includes(best.explanation.kind),
    curve,
  }));
}
