import type { ChainLayout } from '../estimate/chain-groups.ts';
import { type LevelScatter, refitLevel, scatterOfLevel } from '../estimate/scatter-of-level.ts';
import { shiftsOfTakes } from '../estimate/shifts-of-takes.ts';
import type { Model } from '../model/model.ts';
import { holmAdjusted } from '../numeric/multiple-testing.ts';
import { studentTwoSided } from '../numeric/student-t.ts';
import type { VarianceShares } from '../numeric/variance-shares.ts';
import type { TakeSet } from '../takes/take-set.ts';
import type { ScreeningLevels } from './screening-levels.ts';

/** A unit whose level is another one from some take on. */
export interface ChangedUnit {
  readonly unit: string;
  readonly mount: string;
  /** First take after the change: index into the takes. */
  readonly from: number;
  /** Takes of the unit before and after it. */
  readonly before: number;
  readonly after: number;
  /** What tells the order of the takes. */
  readonly order: 'time' | 'file';
  /** By how much the level changed over all frequencies, in dB, with its standard uncertainty and degrees of freedom. */
  readonly shift: number;
  readonly uncertainty: number;
  readonly dof: number;
  /** Corrected for the possible places of the change and for the number of units (Holm 1979). */
  readonly pValue: number;
}

/** A change with fewer takes than this on either side is a matter of single takes. Common practice, no source. */
const FEWEST_TAKES = 3;

/**
 * Units whose takes agree with each other up to some take, and from then on, but not across it: a cable, a mount, or the
 * unit itself is another one since. For each unit the place is that of the largest cumulative sum of what generalised least
 * squares leaves; there the shift is estimated with all scatter taken into account.
 * Source: cumulative sums, Page 1954, Biometrika 41, 100–115; the shift as in `shiftsOfTakes`, for several takes together.
 * Cost: a fit of the links a unit.
 */
export function changedUnits(set: TakeSet, model: Model, levels: ScreeningLevels, risk: number): ChangedUnit[] {
  const constant = levels.templates.find(({ kind }) => kind === 'constant');
  if (constant === undefined || !constant.scatter.isKnown) return [];
  const { scatter } = constant;
  const { order, rank } = takeOrder(set);
  const left = timesPrecision(levels.layout, scatter);
  const found: ChangedUnit[] = [];
  const chances: number[] = [];
  for (const { unit, mount, links } of unitsOf(model)) {
    const takes = [...set.takes.keys()]
      .filter((t) => scatter.deviations.active[t] && model.chains[t]!.links.some((link) => links.has(link)))
      .sort((a, b) => rank[a]! - rank[b]!);
    const at = placeOfChange(takes, left, levels.layout.seatOf);
    if (at === undefined) continue;
    const after = takes.slice(at);
    const change = shiftOf(levels, scatter, after, links);
    if (change === undefined) continue;
    chances.push(Math.min(1, change.p * (takes.length - 2 * FEWEST_TAKES + 1)));
    const { shift, uncertainty, dof } = change;
    found.push({
      unit,
      mount,
      from: after[0]!,
      before: at,
      after: after.length,
      order,
      shift,
      uncertainty,
      dof,
      pValue: 1,
    });
  }
  const adjusted = holmAdjusted(chances);
  return found
    .map((change, k) => ({ ...change, pValue: adjusted[k]! }))
    .filter(({ pValue }) => pValue <= risk)
    .sort((a, b) => a.pValue - b.pValue);
}

/** Order in time where every take tells it, else the order in the files. */
function takeOrder(set: TakeSet): { order: ChangedUnit['order']; rank: number[] } {
  const times = set.takes.map(({ takenAt }) => Date.parse(takenAt));
  if (times.length > 0 && times.every((time) => !Number.isNaN(time))) return { order: 'time', rank: times };
  return { order: 'file', rank: [...set.takes.keys()] };
}

function unitsOf(model: Model): { unit: string; mount: string; links: Set<number> }[] {
  const found = new Map<string, { unit: string; mount: string; links: Set<number> }>();
  for (const { unit, mount, link } of model.responses) {
    const key = JSON.stringify([unit, mount]);
    const entry = found.get(key) ?? { unit, mount, links: new Set<number>() };
    found.set(key, { ...entry, links: entry.links.add(link) });
  }
  return [...found.values()];
}

/** P y of every take: its shift times the information on it; 0 where nothing checks it. */
function timesPrecision(layout: ChainLayout, scatter: LevelScatter): Float64Array {
  const { shift, uncertainty } = shiftsOfTakes(layout, scatter);
  return shift.map((value, t) => (Number.isNaN(uncertainty[t]!) ? 0 : value / uncertainty[t]! ** 2));
}

// A change within a seating is a matter of single takes: between seatings only, repeats do not speak.
function placeOfChange(takes: readonly number[], left: Float64Array, seatOf: Int32Array): number | undefined {
  let best: { at: number; size: number } | undefined;
  let sum = 0;
  for (let at = 1; at <= takes.length - FEWEST_TAKES; at++) {
    sum += left[takes[at - 1]!]!;
    if (at < FEWEST_TAKES || seatOf[takes[at - 1]!] === seatOf[takes[at]!]) continue;
    const size = Math.abs(sum) / Math.sqrt((at * (takes.length - at)) / takes.length);
    if (best === undefined || size > best.size) best = { at, size };
  }
  return best?.at;
}

/**
 * The shift common to some takes: d being 1 for them and 0 else, it is dᵀPy / dᵀPd with variance 1 / dᵀPd. The scatter is
 * found again with the shift taken out: while it is in, it passes for a large scatter of the unit's seatings.
 */
function shiftOf(
  { layout, links }: ScreeningLevels,
  scatter: LevelScatter,
  takes: readonly number[],
  own: ReadonlySet<number>,
) {
  const { deviations } = scatter;
  const marks = new Float64Array(deviations.active.length);
  for (const t of takes) marks[t] = 1;
  let judged = scatter;
  let shift = 0;
  let information = 0;
  for (let pass = 0; pass < PASSES; pass++) {
    const values = deviations.values.map((value, t) => value - shift * marks[t]!);
    judged = pass === 0 ? scatter : scatterOfLevel(layout, links, { ...deviations, values });
    if (!judged.isKnown) return undefined;
    const weigh = (figures: Float64Array) => {
      const level = { ...judged, deviations: { ...deviations, values: figures } };
      const weighed = timesPrecision(layout, refitLevel(layout, links, level, deviations.active));
      return takes.reduce((sum, t) => sum + weighed[t]!, 0);
    };
    information = weigh(marks);
    if (!(information > 0)) return undefined;
    shift = weigh(deviations.values) / information;
  }
  // What a change of the unit is held against is the scatter of its own seatings, or of its partners where it has but one.
  const shares = judged.seating ?? judged.partner;
  const dof = shares === undefined ? judged.repeatDof : dofOverChains(layout, shares, own);
  const uncertainty = 1 / Math.sqrt(information);
  return { shift, uncertainty, dof, p: studentTwoSided(shift / uncertainty, dof) };
}

/** Welch–Satterthwaite degrees of freedom of the summed variance of all chains of a unit: its own share is in each of them. */
function dofOverChains({ groups }: ChainLayout, { shares, dof }: VarianceShares, own: ReadonlySet<number>): number {
  const parts = new Float64Array(shares.length);
  for (const { ends } of groups) {
    if (!ends.some((end) => own.has(end))) continue;
    for (const end of ends) parts[end] = parts[end]! + shares[end]!;
  }
  const total = parts.reduce((sum, part) => sum + part, 0);
  const spent = parts.reduce((sum, part, link) => sum + (part > 0 ? part ** 2 / dof[link]! : 0), 0);
  return spent > 0 ? total ** 2 / spent : Number.POSITIVE_INFINITY;
}

/** Shift, scatter without it, shift again: the third changes nothing that matters. */
const PASSES = 3;
