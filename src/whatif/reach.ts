import { DEFAULT_MODEL_OPTIONS, type ModelOptions } from '../model/model-options.ts';
import type { Design, PlannedSeating, UnitPair } from './design.ts';
import { plannedBench, plannedOptions } from './planned-bench.ts';
import { candidatePairs } from './suggest.ts';

/** Whether the pairs that are allowed can tell the units of a design apart at all. */
export interface Reach {
  /** Takes needed at least beside those made and the controls: each one takes away one freedom at most. */
  readonly fewest: number;
  /** Units that stay open even if every allowed pair is taken. */
  readonly unreachable: readonly string[];
  /** Forbidden pairs, each of which would by itself let all units be told apart. */
  readonly releases: readonly UnitPair[];
}

/** Looks at all allowed pairs together, before any search. */
export function reachOf(design: Design, options: ModelOptions = DEFAULT_MODEL_OPTIONS): Reach {
  const modelOptions = plannedOptions(design, options);
  const isDirectional = modelOptions.model === 'directional';
  const allOf = (allowed: Design) => [
    ...allowed.seatings,
    ...candidatePairs(allowed, isDirectional, 1).map(({ seating }) => seating),
  ];
  const unreachable = openUnits(design, allOf(design), modelOptions);
  const releases =
    unreachable.length === 0
      ? []
      : design.forbidden.filter((released) => {
          const allowed = { ...design, forbidden: design.forbidden.filter((pair) => pair !== released) };
          return openUnits(design, allOf(allowed), modelOptions).length === 0;
        });
  return { fewest: freedoms(design, allOf(design), modelOptions), unreachable, releases };
}

function openUnits(design: Design, seatings: readonly PlannedSeating[], options: ModelOptions): string[] {
  if (seatings.length === 0) return [...design.units];
  const { model, patterns } = plannedBench({ ...design, seatings }, options);
  const { status } = patterns.patterns[0]!.separability;
  const told = new Set(model.responses.filter(({ link }) => status[link] !== 'open').map(({ unit }) => unit));
  return design.units.filter((unit) => !told.has(unit));
}

/** Freedoms that the takes made so far leave, above those that all takes together would leave. */
function freedoms(design: Design, all: readonly PlannedSeating[], options: ModelOptions): number {
  if (all.length === 0) return 0;
  const rankOf = (seatings: readonly PlannedSeating[]) =>
    seatings.length === 0 ? 0 : plannedBench({ ...design, seatings }, options).patterns.patterns[0]!.separability.rank;
  return rankOf(all) - rankOf(design.seatings.filter(({ kind }) => kind === 'made' || kind === 'control'));
}
