import type { ChainLayout } from '../estimate/chain-groups.ts';
import { type LevelScatter, partnerContrasts } from '../estimate/scatter-of-level.ts';
import type { Model } from '../model/model.ts';
import { chiSquareUpperQuantile } from '../numeric/chi-square.ts';
import { fUpper } from '../numeric/f-distribution.ts';
import { holmAdjusted } from '../numeric/multiple-testing.ts';
import { type SquaredContrast, varianceShares } from '../numeric/variance-shares.ts';
import type { ScreeningLevels } from './screening-levels.ts';

/** Whether a unit's response depends on what it is mounted against, in one band. */
export interface HoldFinding {
  readonly unit: string;
  readonly mount: string;
  /** Hertz. */
  readonly from: number;
  readonly to: number;
  /** Standard deviation of the unit's response over partners, in dB, with its confidence bounds; NaN where not testable. */
  readonly partner: number;
  readonly low: number;
  readonly high: number;
  /** Chance of so much partner scatter where there is none, corrected for the number of units and bands (Holm 1979). */
  readonly pValue: number;
  readonly verdict: 'holds' | 'strained' | 'broken' | 'not testable';
}

export interface HoldOptions {
  /** Confidence of the bounds, such as 0.95. */
  readonly coverage: number;
  /** Effect in dB that does not matter. */
  readonly tolerance: number;
  readonly risk: number;
}

/** Fewer degrees of freedom than this say nothing of a unit's share. Common practice, no source. */
const FEWEST_DOF = 2;

/**
 * Tests every unit and third-octave for partner scatter: what the means of its chains leave over the additive model, each
 * being a sum of the shares of both ends and of what seating and repeats let expect.
 * - `broken`: the lower confidence bound of the unit's share is above the tolerance; `strained`: significant, but not that
 *   much; `holds`: not significant, and the upper bound is within the tolerance; else `not testable`: the data can show
 *   neither, as where neither repeats nor seatings nor a given uncertainty tell partner scatter from other scatter.
 * - Without such a figure, misfit of whatever origin above the tolerance is still reported as `broken`.
 */
export function holdFindings(model: Model, levels: ScreeningLevels, options: HoldOptions): HoldFinding[] {
  const units = unitsOf(model);
  const raw = levels.bands.flatMap(({ from, to, scatter }) => {
    const band = bandContrasts(levels.layout, scatter, levels.links);
    // Without a test of its own a unit is judged by its bound alone, which then has to bear all units and bands.
    const judged = band.isTestable ? 1 : units.length * levels.bands.length;
    return units.map((unit) => ({ unit, from, to, ...shareOf(unit.links, band, options, judged) }));
  });
  const adjusted = holmAdjusted(raw.map(({ pValue }) => pValue));
  const findings = raw.map(({ unit: { unit, mount }, from, to, partner, low, high, isTestable }, k): HoldFinding => {
    const pValue = adjusted[k]!;
    const isSignificant = isTestable ? pValue <= options.risk : true;
    const verdict = verdictOf({ partner, low, high, isTestable, isSignificant }, options.tolerance);
    return { unit, mount, from, to, partner, low: isSignificant ? low : 0, high, pValue, verdict };
  });
  const order = new Map(units.map(({ unit, mount }, at) => [JSON.stringify([unit, mount]), at]));
  const place = (finding: HoldFinding) => order.get(JSON.stringify([finding.unit, finding.mount]))!;
  return findings.sort((a, b) => place(a) - place(b) || a.from - b.from);
}

interface Judged {
  readonly partner: number;
  readonly low: number;
  readonly high: number;
  readonly isTestable: boolean;
  readonly isSignificant: boolean;
}

function verdictOf(judged: Judged, tolerance: number): HoldFinding['verdict'] {
  const { partner, low, high, isTestable, isSignificant } = judged;
  if (Number.isNaN(partner)) return 'not testable';
  if (isSignificant && low > tolerance) return 'broken';
  if (!isTestable) return 'not testable';
  if (isSignificant) return 'strained';
  return high <= tolerance ? 'holds' : 'not testable';
}

interface UnitLinks {
  readonly unit: string;
  readonly mount: string;
  readonly links: ReadonlySet<number>;
}

function unitsOf(model: Model): UnitLinks[] {
  const found = new Map<string, { unit: string; mount: string; links: Set<number> }>();
  for (const { unit, mount, link } of model.responses) {
    const key = JSON.stringify([unit, mount]);
    const entry = found.get(key) ?? { unit, mount, links: new Set() };
    entry.links.add(link);
    found.set(key, entry);
  }
  return [...found.values()];
}

interface BandContrasts {
  readonly contrasts: readonly SquaredContrast[];
  /** Partner share of every link in dB², to start from. */
  readonly start: Float64Array;
  /** Degrees of freedom behind the known part. */
  readonly knownDof: number;
  /** Whether scatter below the partner step is known, so that the two can be told apart. */
  readonly isTestable: boolean;
}

function bandContrasts(
  layout: ChainLayout,
  { fitted, repeatDof, seating, partner }: LevelScatter,
  n: number,
): BandContrasts {
  const seatDof = seating === undefined ? Number.POSITIVE_INFINITY : seating.dof.reduce((sum, dof) => sum + dof, 0);
  return {
    contrasts: partnerContrasts(layout, fitted, seating),
    start: partner?.shares ?? new Float64Array(n),
    knownDof: seating === undefined ? repeatDof : seatDof,
    isTestable: repeatDof > 0 || seating !== undefined,
  };
}

function shareOf(
  links: ReadonlySet<number>,
  { contrasts, start, knownDof, isTestable }: BandContrasts,
  { coverage }: HoldOptions,
  judged: number,
) {
  const nothing = { partner: Number.NaN, low: Number.NaN, high: Number.NaN, pValue: Number.NaN, isTestable: false };
  const own = contrasts.filter(({ a, b }) => links.has(a) || links.has(b));
  const dof = own.reduce((sum, contrast) => sum + contrast.dof, 0);
  if (dof < FEWEST_DOF) return nothing;
  // Shares of the others as they are without this unit, whose own scatter must not be laid at their door.
  const others = contrasts.filter(({ a, b }) => !(links.has(a) || links.has(b)));
  const { shares } = varianceShares(others, start.length, start);
  // What each chain of the unit would show if the unit's own share were q, beside the share of the other end.
  const rest = own.map(
    ({ a, b, known }) => known + [a, b].reduce((sum, end) => sum + (links.has(end) ? 0 : shares[end]!), 0),
  );
  const times = own.map(({ a, b }) => (links.has(a) && links.has(b) ? 2 : 1));
  const ratio = (q: number, scale = 1) =>
    own.reduce((sum, { square, dof: nu }, k) => sum + (nu * square * scale) / (times[k]! * q + rest[k]!), 0);
  const observed = ratio(0);
  const pValue = isTestable ? fUpper(observed / dof, dof, Math.max(1, knownDof)) : Number.NaN;
  const tail = (1 - coverage) / 2 / judged;
  const solveFor = (target: number, scale = 1) =>
    observed * scale <= target ? 0 : root((q) => ratio(q, scale) - target);
  // Less scatter than expected is luck: the upper bound is never below that of just what is expected.
  const atLeastExpected = observed > 0 ? Math.max(1, dof / observed) : 1;
  return {
    partner: Math.sqrt(solveFor(dof)),
    low: Math.sqrt(solveFor(chiSquareUpperQuantile(tail, dof))),
    high: Math.sqrt(solveFor(chiSquareUpperQuantile(1 - tail, dof), atLeastExpected)),
    pValue,
    isTestable,
  };
}

/** Root of a falling function that is positive at 0. */
function root(f: (q: number) => number): number {
  let high = 1e-6;
  while (f(high) > 0) high *= 4;
  let low = high === 1e-6 ? 0 : high / 4;
  for (let step = 0; step < 60; step++) {
    const middle = (low + high) / 2;
    if (f(middle) > 0) low = middle;
    else high = middle;
  }
  return (low + high) / 2;
}
