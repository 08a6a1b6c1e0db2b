import { DEFAULT_MODEL_OPTIONS, type ModelOptions } from '../model/model-options.ts';
import type { AssumedBand } from './assumed-scatter.ts';
import { candidateBench } from './candidate-bench.ts';
import { type Criterion, isBetter, type Merit } from './criterion.ts';
import { type Design, type PlannedSeating, pairKey, seatingOf } from './design.ts';
import { bestSet } from './exchange.ts';
import { plannedOptions } from './planned-bench.ts';
import { trialSet } from './trial-set.ts';

export interface SuggestOptions {
  /** Seatings to add. */
  readonly add: number;
  readonly criterion: Criterion;
  /** Whether pairs that the design has may be mounted again, and new ones more than once. */
  readonly again: boolean;
  /** Takes of each added seating. */
  readonly repeats: number;
  readonly seed: number;
  /** The pairs to choose from; absent: all that are allowed. */
  readonly among?: readonly PlannedSeating[] | undefined;
  /** Starts of an exchange; absent: as many as a few seconds allow. */
  readonly starts?: number | undefined;
  readonly model?: ModelOptions | undefined;
  readonly onProgress?: ((done: number, total: number) => void) | undefined;
}

/** What one more take brought, in the order in which the takes bring most. */
export interface SuggestedStep {
  readonly seating: PlannedSeating;
  readonly merit: Merit;
}

export interface Suggestion {
  /** The design with the added seatings at its end, those first that bring most. */
  readonly design: Design;
  readonly before: Merit | undefined;
  readonly steps: readonly SuggestedStep[];
  /** Whether every possible set was tried; else an exchange from `tried` starts found it. */
  readonly isExhaustive: boolean;
  readonly tried: number;
  /** Whether pairs had to be mounted again because no new one was left. */
  readonly hasAgain: boolean;
}

/**
 * The best takes to add to a design, those that it has and the forbidden pairs respected.
 * Cost: candidates × takes to add × (links + chains), times starts and passes; links³ a candidate taken.
 * @param band the scatter that counts.
 * @returns undefined where no pair is left to add.
 * @throws InputError where the model's options name units that are not there.
 */
export function suggestTakes(design: Design, band: AssumedBand, options: SuggestOptions): Suggestion | undefined {
  const modelOptions = plannedOptions(design, options.model ?? DEFAULT_MODEL_OPTIONS);
  const pairs =
    options.among?.map((seating) => ({ seating, isNew: true })) ??
    candidatePairs(design, modelOptions.model === 'directional', options.repeats);
  const fresh = pairs.filter(({ isNew }) => isNew).map(({ seating }) => seating);
  const hasAgain = options.again || fresh.length < options.add;
  const candidates = hasAgain ? pairs.map(({ seating }) => seating) : fresh;
  if (candidates.length === 0 || options.add === 0) return undefined;
  const bench = candidateBench(design, candidates, band, modelOptions);
  const found = bestSet(bench, {
    count: options.add,
    // Once each, where that is enough.
    most: hasAgain ? options.add : 1,
    criterion: options.criterion,
    seed: options.seed,
    starts: options.starts,
    onProgress: options.onProgress,
  });
  const set = trialSet(bench, options.criterion, new Int32Array(bench.chains.length));
  const before = design.seatings.length === 0 ? undefined : set.merit();
  const left = Int32Array.from(found.added);
  const steps: SuggestedStep[] = [];
  while (steps.length < options.add) {
    let best: { chain: number; merit: Merit } | undefined;
    for (const [chain, count] of left.entries()) {
      if (count === 0) continue;
      const merit = set.meritWith(chain);
      if (best === undefined || isBetter(merit, best.merit)) best = { chain, merit };
    }
    left[best!.chain] = left[best!.chain]! - 1;
    set.change(best!.chain, 1);
    steps.push({ seating: bench.chains[best!.chain]!.seating!, merit: best!.merit });
  }
  return {
    design: {
      ...design,
      name: design.seatings.length === 0 ? `suggested, ${design.name}` : `${design.name} + ${options.add}`,
      seatings: [...design.seatings, ...steps.map(({ seating }) => seating)],
    },
    before,
    steps,
    isExhaustive: found.isExhaustive,
    tried: found.tried,
    hasAgain,
  };
}

interface CandidatePair {
  readonly seating: PlannedSeating;
  readonly isNew: boolean;
}

/** Every pair that may be taken, in the order of the units; reciprocal: once, in the direction that the design has. */
export function candidatePairs(design: Design, isDirectional: boolean, repeats: number): CandidatePair[] {
  const forbidden = new Set(design.forbidden.map(([one, other]) => pairKey(one, other)));
  const seen = new Map(design.seatings.map((seating) => [keyOf(seating, isDirectional), seating]));
  const places = placesOf(design);
  const emitters = new Set(design.seatings.map(({ emitter }) => emitter));
  const receivers = new Set(design.seatings.map(({ receiver }) => receiver));
  const used = (unit: string) => emitters.has(unit) || receivers.has(unit);
  // A unit keeps to the roles that it has in the design; one that is not in it may have either.
  const canEmit = (unit: string) => !isDirectional || !used(unit) || emitters.has(unit);
  const canReceive = (unit: string) => !isDirectional || !used(unit) || receivers.has(unit);
  return places.flatMap((one, i) =>
    places.flatMap((other, j): CandidatePair[] => {
      if (one.unit === other.unit || (!isDirectional && j < i)) return [];
      if (forbidden.has(pairKey(one.unit, other.unit)) || !canEmit(one.unit) || !canReceive(other.unit)) return [];
      const fresh = seatingOf(one.unit, other.unit, {
        emitterMount: one.mount,
        receiverMount: other.mount,
        repeats,
        kind: 'added',
      });
      const there = seen.get(keyOf(fresh, isDirectional));
      if (there === undefined) return [{ seating: fresh, isNew: true }];
      // A session that is over is not taken up again.
      const session = there.kind === 'made' ? '' : there.session;
      const anew = { emitterSeating: undefined, receiverSeating: undefined };
      return [{ seating: { ...there, ...anew, session, repeats, kind: 'added' as const }, isNew: false }];
    }),
  );
}

interface Place {
  readonly unit: string;
  readonly mount: string;
}

function placesOf({ units, seatings }: Design): Place[] {
  const found = new Map<string, Place>();
  for (const unit of units) {
    const mounts = seatings.flatMap((s) => [
      ...(s.emitter === unit ? [s.emitterMount] : []),
      ...(s.receiver === unit ? [s.receiverMount] : []),
    ]);
    for (const mount of mounts.length === 0 ? [''] : mounts) found.set(JSON.stringify([unit, mount]), { unit, mount });
  }
  return [...found.values()];
}

function keyOf(seating: PlannedSeating, isDirectional: boolean): string {
  const ends = [
    JSON.stringify([seating.emitter, seating.emitterMount]),
    JSON.stringify([seating.receiver, seating.receiverMount]),
  ];
  return JSON.stringify(isDirectional ? ends : ends.sort());
}
