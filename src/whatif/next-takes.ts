import type { Examination, ExtraTake } from '../findings/examination.ts';
import { THIRD_UNIT } from '../findings/examination.ts';
import type { ModelOptions } from '../model/model-options.ts';
import { coverageFactor } from '../numeric/student-t.ts';
import type { Take, TakeSet } from '../takes/take-set.ts';
import type { AssumedBand } from './assumed-scatter.ts';
import type { BenchTimes } from './costs.ts';
import { type Design, type PlannedSeating, seatingOf } from './design.ts';
import { plannedOptions } from './planned-bench.ts';
import { type BandPrediction, type Prediction, predict } from './predict.ts';
import { candidatePairs, suggestTakes } from './suggest.ts';

/** Why a take is worth adding. */
export type NextPurpose = 'close' | 'redo' | 'break tie' | 'check' | 'target';

/** A take, or a few that only help together, with what they buy. Standard uncertainties in dB; NaN where there is none. */
export interface NextTakes {
  readonly purpose: NextPurpose;
  readonly seatings: readonly PlannedSeating[];
  /** Names of what it is for: units that get a level, takes that are told apart or checked; the worst unit of a target. */
  readonly about: readonly string[];
  /** Units that gain a level. */
  readonly closes: number;
  /** Takes that something checks then, and nothing did before. */
  readonly checks: number;
  /** Mean and largest uncertainty of the units with a level, as seated, once it is there. */
  readonly mean: number;
  readonly worst: number;
}

export interface NextPlan {
  /** What the takes of the run give by themselves. */
  readonly mean: number;
  readonly worst: number;
  readonly worstUnit: string;
  /** The band that all these figures are of: the one with the largest mean uncertainty. */
  readonly band: AssumedBand;
  readonly takes: readonly NextTakes[];
  /** Absent where none was asked for. */
  readonly target: NextTarget | undefined;
  /** Freedoms that no pair of units at hand closes: a third unit is wanted. */
  readonly needsUnit: boolean;
}

/** How far takes bring the worst unit. Expanded uncertainties in dB. */
export interface NextTarget {
  readonly expanded: number;
  readonly reached: number;
  readonly isReached: boolean;
  /** What no number of takes can get below, since another partner is not the same: every pair taken endlessly often. */
  readonly limit: number;
}

export interface NextOptions {
  readonly model: ModelOptions;
  readonly times: BenchTimes;
  readonly coverage: number;
  /** Expanded uncertainty that the worst unit is to have, in dB. */
  readonly target: number | undefined;
  /** Takes that may be added for the target. */
  readonly most: number;
  readonly seed: number;
  readonly onProgress?: ((done: number, total: number) => void) | undefined;
}

/**
 * The takes most worth adding to a run: those that close what is open, take flagged ones again, break ties, check what
 * nothing checks, and bring the worst unit below a target; each with what it buys beside all that came before it.
 * @param design the takes of the run that stand; see `designOfRun`.
 */
export async function nextTakes(
  design: Design,
  set: TakeSet,
  examination: Examination,
  bands: readonly AssumedBand[],
  options: NextOptions,
): Promise<NextPlan> {
  const at = async (seatings: readonly PlannedSeating[]) => {
    const whole = { ...design, seatings: [...design.seatings, ...seatings] };
    const { model, times } = options;
    const { bench, bands: predicted, worstBand } = await predict(whole, bands, { model, times });
    return { bench, ...predicted[worstBand]! };
  };
  const before = await at([]);
  const added: PlannedSeating[] = [];
  const takes: NextTakes[] = [];
  const seen = new Set<string>();
  let last = before;
  const addIfNew = async (purpose: NextPurpose, seatings: readonly PlannedSeating[], about: readonly string[]) => {
    const key = JSON.stringify(seatings.map(({ emitter, receiver, path }) => [emitter, receiver, path]));
    if (seatings.length === 0 || seen.has(key)) return;
    seen.add(key);
    added.push(...seatings);
    const now = await at(added);
    takes.push({ purpose, seatings, about, ...gains(design, last, now) });
    last = now;
  };
  let needsUnit = false;
  for (const finding of examination.open) {
    if (finding.status !== 'open') continue;
    needsUnit ||= finding.extraTakes.some(({ receiver }) => receiver === THIRD_UNIT);
    await addIfNew('close', finding.extraTakes.map(seatingOfExtra), finding.responses);
  }
  for (const { take, verdict } of examination.takes) {
    if (verdict !== 'flagged') continue;
    const { id, emitter, receiver, emitterMount, receiverMount, path } = set.takes[take]!;
    const again = seatingOf(emitter, receiver, { emitterMount, receiverMount, path, kind: 'added' });
    await addIfNew('redo', [again], [id]);
  }
  for (const [purpose, wanted] of [
    ['break tie', 'tied'],
    ['check', 'uncheckable'],
  ] as const) {
    for (const { take, verdict, cure } of examination.takes) {
      if (verdict !== wanted || cure === undefined) continue;
      // A take before it may have checked this one as well.
      if (purpose === 'break tie' || !isChecked(set.takes[take]!, last))
        await addIfNew(purpose, [seatingOfExtra(cure)], [set.takes[take]!.id]);
    }
  }
  const target = await towardsTarget();
  return {
    mean: before.mean,
    worst: before.worst,
    worstUnit: worstUnitOf(before),
    band: before.scatter,
    takes,
    target,
    needsUnit,
  };

  async function towardsTarget(): Promise<NextTarget | undefined> {
    if (options.target === undefined) return undefined;
    const expanded = options.target;
    const factor = coverageFactor(options.coverage, Number.POSITIVE_INFINITY);
    const within = (worst: number) => factor * worst <= expanded;
    const limit =
      factor * (await leastWorst({ ...design, seatings: [...design.seatings, ...added] }, last.scatter, options));
    if (!within(last.worst) && limit <= expanded) {
      const seatings = await fewestFor((worst) => within(worst));
      for (const seating of seatings) {
        const about = [worstUnitOf(last)];
        added.push(seating);
        const now = await at(added);
        takes.push({ purpose: 'target', seatings: [seating], about, ...gains(design, last, now) });
        last = now;
      }
    }
    const reached = factor * last.worst;
    return { expanded, reached, isReached: within(last.worst), limit };
  }

  /** The smallest best set that reaches the target, or the largest that may be added: doubled, then halved in. */
  async function fewestFor(isEnough: (worst: number) => boolean): Promise<readonly PlannedSeating[]> {
    const whole = { ...design, seatings: [...design.seatings, ...added] };
    const bestOf = async (count: number) => {
      const suggested = suggestTakes(whole, last.scatter, {
        add: count,
        criterion: 'worst',
        again: true,
        repeats: 1,
        seed: options.seed,
        // Several sizes are tried: one greedy start each.
        starts: 1,
        model: options.model,
      });
      const seatings = suggested?.steps.map(({ seating }) => seating) ?? [];
      return { seatings, isEnough: isEnough((await at([...added, ...seatings])).worst) };
    };
    let [below, count] = [0, 1];
    let found = await bestOf(count);
    while (!found.isEnough && count < options.most) {
      options.onProgress?.(count, options.most);
      below = count;
      count = Math.min(options.most, 2 * count);
      found = await bestOf(count);
    }
    while (found.isEnough && count - below > 1) {
      const middle = (below + count) >> 1;
      const fewer = await bestOf(middle);
      if (fewer.isEnough) [found, count] = [fewer, middle];
      else below = middle;
    }
    return found.seatings;
  }
}

/** Worst uncertainty, as seated, that no number of takes can get below: every pair taken endlessly often. */
async function leastWorst(design: Design, band: AssumedBand, { model, times }: NextOptions): Promise<number> {
  const isDirectional = plannedOptions(design, model).model === 'directional';
  const all = candidatePairs(design, isDirectional, 1).map(({ seating }) => seating);
  const endless = { ...band, repeat: 0, reseat: 0 };
  const { bands } = await predict({ ...design, seatings: [...design.seatings, ...all] }, [endless], { model, times });
  return bands[0]!.worst;
}

function seatingOfExtra({ emitter, receiver, path }: ExtraTake): PlannedSeating {
  const [one, other] = [placeOf(emitter), placeOf(receiver)];
  return seatingOf(one.unit, other.unit, {
    emitterMount: one.mount,
    receiverMount: other.mount,
    path,
    kind: 'added',
  });
}

function placeOf(name: string): { unit: string; mount: string } {
  const at = name.lastIndexOf('@');
  return at > 0 ? { unit: name.slice(0, at), mount: name.slice(at + 1) } : { unit: name, mount: '' };
}

function worstUnitOf({ units, worst }: BandPrediction): string {
  const found = units.find(({ asSeated }) => asSeated === worst);
  if (found === undefined) return '';
  return found.mount === '' ? found.unit : `${found.unit}@${found.mount}`;
}

type Bench = BandPrediction & Pick<Prediction, 'bench'>;

/** Whether something checks the take, or the others of its pair, as things stand. */
function isChecked({ emitter, receiver, emitterMount, receiverMount, path, session }: Take, { bench, takes }: Bench) {
  const at = bench.set.takes.findIndex(
    (other) =>
      other.emitter === emitter &&
      other.receiver === receiver &&
      other.emitterMount === emitterMount &&
      other.receiverMount === receiverMount &&
      other.path === path &&
      other.session === session,
  );
  return at >= 0 && !Number.isNaN(takes[at]!.smallestShift);
}

function gains(design: Design, before: BandPrediction, after: BandPrediction) {
  const own = new Set(design.units);
  const told = ({ units }: BandPrediction) =>
    units.filter(({ status, unit }) => status !== 'open' && own.has(unit)).length;
  const unchecked = ({ takes }: BandPrediction) =>
    takes.filter(({ smallestShift }) => Number.isNaN(smallestShift)).length;
  return {
    closes: Math.max(0, told(after) - told(before)),
    checks: Math.max(0, unchecked(before) - unchecked(after)),
    mean: after.mean,
    worst: after.worst,
  };
}
