import { type ChainLayout, chainLayout } from '../estimate/chain-groups.ts';
import { buildModel } from '../model/build-model.ts';
import { findPatterns, type Patterns } from '../model/find-patterns.ts';
import type { Model } from '../model/model.ts';
import { DEFAULT_MODEL_OPTIONS, type ModelOptions } from '../model/model-options.ts';
import type { Take, TakeSet } from '../takes/take-set.ts';
import type { Design, PlannedSeating } from './design.ts';

/** A design as the solver would meet it: takes without levels, what explains them, and what they tell apart. */
export interface PlannedBench {
  readonly design: Design;
  /** All levels are 0 dB: none of them has a say in a covariance. */
  readonly set: TakeSet;
  readonly model: Model;
  readonly layout: ChainLayout;
  readonly patterns: Patterns;
  /** Index into the design's seatings of each take. */
  readonly seatingOfTake: Int32Array;
}

/** What the frequency is called where a design knows none. Hertz. */
const ANY_FREQUENCY = 1000;

/**
 * The model that a design is meant for where nobody says: reciprocal, unless its takes use every unit in one role only, as
 * a bench of projectors and receivers does. Control takes say nothing of roles.
 */
export function plannedOptions(design: Design, options: ModelOptions = DEFAULT_MODEL_OPTIONS): ModelOptions {
  if (options.model !== 'auto') return options;
  const seatings = design.seatings.filter(({ kind }) => kind !== 'control');
  const emitters = new Set(seatings.map(({ emitter }) => emitter));
  const receivers = new Set(seatings.map(({ receiver }) => receiver));
  const hasFreeUnit = design.units.some((unit) => !emitters.has(unit) && !receivers.has(unit));
  const hasBoth = [...emitters].some((unit) => receivers.has(unit));
  const isOfOneRole = options.reversible.length > 0 || options.references.some(({ role }) => role !== 'both');
  return { ...options, model: isOfOneRole || !(hasBoth || hasFreeUnit) ? 'directional' : 'reciprocal' };
}

/**
 * Sets the design up with the model's own rules. Gains are taken as known.
 * @param frequencies hertz, ascending: one for each stretch with scatter of its own; certificates are looked up at them.
 * @throws InputError where the options name units that the design does not have.
 */
export function plannedBench(
  design: Design,
  options: ModelOptions = DEFAULT_MODEL_OPTIONS,
  frequencies: readonly number[] = [ANY_FREQUENCY],
): PlannedBench {
  const seatingOfTake: number[] = [];
  const takes = design.seatings.flatMap((seating, s) =>
    Array.from({ length: seating.repeats }, (_, repeat) => {
      seatingOfTake.push(s);
      return takeOf(seating, s, seatingOfTake.length - 1, repeat);
    }),
  );
  const set = plannedSet(takes, frequencies);
  const model = buildModel(set, { ...plannedOptions(design, options), looseGain: false });
  return {
    design,
    set,
    model,
    layout: chainLayout(set, model),
    patterns: findPatterns(set, model),
    seatingOfTake: Int32Array.from(seatingOfTake),
  };
}

/** Indices into the model's responses, in the order in which the design names its units. */
export function responsesInOrder({ design, model }: Pick<PlannedBench, 'design' | 'model'>): number[] {
  const place = new Map(design.units.map((unit, at) => [unit, at]));
  const at = (response: number) => place.get(model.responses[response]!.unit) ?? place.size;
  return [...model.responses.keys()].sort((a, b) => at(a) - at(b) || a - b);
}

/** A take as a file would tell it. @param s the seating's, @param index the take's place in the design. */
function takeOf(seating: PlannedSeating, s: number, index: number, repeat: number): Take {
  const { emitter, receiver, emitterMount, receiverMount, path, session } = seating;
  // No label of a bench looks like this, so that a seating of its own is never taken for another one.
  const own = `seating ${s + 1} of the plan`;
  return {
    id: `T${String(index + 1).padStart(3, '0')}`,
    file: 'plan',
    line: index + 2,
    emitter,
    receiver,
    path,
    session,
    emitterMount,
    receiverMount,
    emitterSeating: seating.emitterSeating ?? own,
    receiverSeating: seating.receiverSeating ?? own,
    repeat: String(repeat + 1),
    takenAt: '',
    distance: undefined,
    note: '',
  };
}

/** Takes at some frequencies, every level 0 dB. */
function plannedSet(takes: readonly Take[], frequencies: readonly number[]): TakeSet {
  return {
    takes,
    frequencies: Float64Array.from(frequencies),
    levels: new Float64Array(takes.length * frequencies.length),
    uncertainty: undefined,
    grid: { kind: 'as measured' },
    unused: [],
    notices: [],
  };
}
