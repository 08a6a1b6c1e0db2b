import type { Patterns } from '../model/find-patterns.ts';
import type { Model } from '../model/model.ts';
import { holmAdjusted } from '../numeric/multiple-testing.ts';
import { type NestedAnova, type SquaredTraces, squaredTraces } from '../numeric/nested-anova.ts';
import type { TakeSet } from '../takes/take-set.ts';
import { bandStrata, ladderPatterns } from './band-strata.ts';
import { ladderRungs, type Rungs } from './ladder-rungs.ts';
import type { LadderVerdict, ScatterStep } from './scatter-step.ts';
import { thirdOctaves } from './third-octaves.ts';

export interface LadderOptions {
  /** Indices of takes to leave out, e.g. those that were flagged. */
  readonly exclude?: ReadonlySet<number>;
  /** Of the confidence intervals; 0.95 where absent. */
  readonly coverage?: number;
  /** Risk that any band at all is said to show a step that is not there, each step on its own; 0.05 where absent. */
  readonly risk?: number;
}

/**
 * The ladder of scatter per third-octave band: repeat (same seating, taken again) → reseat (same pair, mounted again) →
 * partner (pair against the additive model). What is a pair and a seating is told at `ladderDesign`. The units' responses
 * drop out exactly; the readings' own uncertainties are not used, and all readings of a band count the same.
 * Cost: linear in the readings, plus, per band, takes × frequencies² / 2 (at most 96 frequencies a band are looked at for
 * their correlation) and, once a pattern, links³. Unequal groups cost about ten more passes over the readings (restricted
 * maximum likelihood), and groups² × links once a band.
 */
export function scatterLadder(
  set: TakeSet,
  model: Model,
  patterns: Patterns,
  options: LadderOptions = {},
): ScatterStep[] {
  const { exclude = new Set<number>(), coverage = 0.95, risk = 0.05 } = options;
  const ladder = ladderPatterns(set, model, patterns, exclude);
  const { bands, bandOf } = thirdOctaves(set.frequencies);
  const members = bands.map(() => [] as number[]);
  bandOf.forEach((band, f) => {
    members[band]!.push(f);
  });
  const known = new Map<NestedAnova, SquaredTraces>();
  const tracesOf = (anova: NestedAnova) => {
    const traces = known.get(anova) ?? squaredTraces(anova);
    known.set(anova, traces);
    return traces;
  };
  const rungs = members.map((frequencies) =>
    ladderRungs(bandStrata(set, model, ladder, patterns.patternOf, frequencies), tracesOf, coverage),
  );
  const verdicts = verdictsOf(rungs, risk);
  return rungs.map((rung, b) => ({ from: bands[b]!.from, to: bands[b]!.to, ...rung, verdict: verdicts[b]! }));
}

function verdictsOf(rungs: readonly Rungs[], risk: number): LadderVerdict[] {
  const reseat = holmAdjusted(rungs.map((rung) => rung.pReseat));
  const partner = holmAdjusted(rungs.map((rung) => rung.pPartner));
  return rungs.map((rung, b) => {
    if (partner[b]! <= risk) return rung.partnerAgainst === 'reseat' ? 'partner' : 'reseat or partner';
    if (reseat[b]! <= risk) return 'reseat';
    return Number.isNaN(partner[b]!) && Number.isNaN(reseat[b]!) ? 'not testable' : 'none shown';
  });
}
