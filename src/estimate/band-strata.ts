import type { Patterns } from '../model/find-patterns.ts';
import type { Model } from '../model/model.ts';
import { effectiveCount } from '../numeric/effective-count.ts';
import { type NestedAnova, nestedAnova, splitIntoStrata } from '../numeric/nested-anova.ts';
import type { NestedPart } from '../numeric/nested-reml.ts';
import { type NestedRows, nestedRows } from '../numeric/nested-rows.ts';
import type { TakeSet } from '../takes/take-set.ts';
import { ladderDesign, seatingsOf } from './ladder-design.ts';

export type Stratum = 'within' | 'inner' | 'outer';

const STRATA: readonly Stratum[] = ['within', 'inner', 'outer'];

/** One stratum pooled over the frequencies of a band. */
interface PooledStratum {
  /** dB². */
  readonly sumOfSquares: number;
  /** Summed over the frequencies, as if they were independent. */
  readonly dof: number;
  /** At the frequencies that stand for the band: their inner products, row-major, and degrees of freedom. */
  readonly products: Float64Array;
  readonly series: Float64Array;
}

/** Expected sums of squares of a band are as in `NestedAnova`, summed over its frequencies. */
export interface BandStrata {
  readonly frequencies: number;
  readonly strata: Readonly<Record<Stratum, PooledStratum>>;
  readonly innerOfInner: number;
  readonly outerOfInner: number;
  readonly outerOfOuter: number;
  readonly balanced: boolean;
  /** The analysis that most frequencies of the band share. */
  readonly main: NestedAnova | undefined;
  /** The responses for restricted maximum likelihood, fixed links taken out; empty for a balanced band. */
  readonly parts: readonly NestedPart[];
}

/** A pattern made ready for the ladder. */
export interface LadderPattern {
  readonly takes: readonly number[];
  readonly anova: NestedAnova;
  /** For restricted maximum likelihood; absent where no pattern needs it. */
  readonly rows: NestedRows | undefined;
}

/** Correlation along frequency is looked at with at most so many frequencies a band, evenly picked; fewer only cost degrees of freedom. */
const MOST_FREQUENCIES = 96;

/** Prepares the patterns, leaving out some takes. */
export function ladderPatterns(
  set: TakeSet,
  model: Model,
  { patterns }: Patterns,
  exclude: ReadonlySet<number>,
): LadderPattern[] {
  const seatings = seatingsOf(set, model);
  const prepared = patterns.map((pattern) => {
    const takes = pattern.takes.filter((take) => !exclude.has(take));
    const design = ladderDesign(model, seatings, takes);
    return { takes, design, anova: nestedAnova(design) };
  });
  const unequal = prepared.some(({ anova }) => !anova.balanced);
  return prepared.map(({ takes, design, anova }) => ({
    takes,
    anova,
    rows: unequal ? nestedRows(design, anova.projections.columns.place) : undefined,
  }));
}

/**
 * Splits every reading of a band into its strata.
 * @param frequencies indices of the band's frequencies, ascending. Cost: readings, plus takes × frequencies² / 2.
 */
export function bandStrata(
  set: TakeSet,
  model: Model,
  ladder: readonly LadderPattern[],
  patternOf: Int32Array,
  frequencies: readonly number[],
): BandStrata {
  const spread = picked(frequencies);
  const vectors = { within: [], inner: [], outer: [] } as Record<Stratum, Float64Array[]>;
  const series = { within: [], inner: [], outer: [] } as Record<Stratum, number[]>;
  const squares = { within: 0, inner: 0, outer: 0 };
  const dof = { within: 0, inner: 0, outer: 0 };
  const expected = { innerOfInner: 0, outerOfInner: 0, outerOfOuter: 0 };
  const balanced = frequencies.every((f) => ladder[patternOf[f]!]!.anova.balanced);
  const responses = new Map<number, Float64Array[]>();
  for (const f of frequencies) {
    const { takes, anova } = ladder[patternOf[f]!]!;
    const y = Float64Array.from(takes, (take) => levelWithoutKnown(set, model, take, f));
    const parts = {
      within: new Float64Array(y.length),
      inner: new Float64Array(y.length),
      outer: new Float64Array(y.length),
    };
    splitIntoStrata(anova, y, parts);
    for (const stratum of STRATA) {
      if (anova.dof[stratum] === 0) parts[stratum].fill(0);
      else squares[stratum] += sumOfSquares(parts[stratum]);
      dof[stratum] += anova.dof[stratum];
      if (!spread.has(f)) continue;
      vectors[stratum].push(onAllTakes(parts[stratum], takes, set.takes.length));
      series[stratum].push(anova.dof[stratum]);
    }
    expected.innerOfInner += anova.innerOfInner;
    expected.outerOfInner += anova.outerOfInner;
    expected.outerOfOuter += anova.outerOfOuter;
    if (balanced || takes.length === 0) continue;
    const rest = y.map((_, r) => parts.within[r]! + parts.inner[r]! + parts.outer[r]!);
    const own = responses.get(patternOf[f]!);
    if (own === undefined) responses.set(patternOf[f]!, [rest]);
    else own.push(rest);
  }
  const pooled = (stratum: Stratum): PooledStratum => ({
    sumOfSquares: squares[stratum],
    dof: dof[stratum],
    products: dof[stratum] > 0 ? innerProducts(vectors[stratum]) : new Float64Array(vectors[stratum].length ** 2),
    series: Float64Array.from(series[stratum]),
  });
  return {
    frequencies: frequencies.length,
    strata: { within: pooled('within'), inner: pooled('inner'), outer: pooled('outer') },
    ...expected,
    balanced,
    main: ladder[mostCommon(frequencies.map((f) => patternOf[f]!).filter((p) => ladder[p]!.takes.length > 0))]?.anova,
    parts: [...responses].map(([pattern, own]) => ({ rows: ladder[pattern]!.rows!, responses: own })),
  };
}

/**
 * What a degree of freedom of one frequency is worth in the band's sum, from the strata named together: 1 for independent
 * frequencies, 1/F where F frequencies all say the same.
 */
export function worthOfFrequencies({ strata, frequencies }: BandStrata, names: readonly Stratum[]): number {
  const all = strata[names[0]!].series.length;
  const series = Float64Array.from({ length: all }, (_, f) =>
    names.reduce((sum, name) => sum + strata[name].series[f]!, 0),
  );
  const used = [...series.keys()].filter((f) => series[f]! > 0);
  if (used.length === 0) return 1 / frequencies;
  const products = Float64Array.from({ length: used.length ** 2 }, (_, cell) => {
    const at = used[Math.floor(cell / used.length)]! * all + used[cell % used.length]!;
    return names.reduce((sum, name) => sum + strata[name].products[at]!, 0);
  });
  const count = effectiveCount(
    products,
    Float64Array.from(used, (f) => series[f]!),
  );
  return count / (frequencies * (used.length / all));
}

function levelWithoutKnown(set: TakeSet, model: Model, take: number, f: number): number {
  return set.levels[take * set.frequencies.length + f]! - (model.chains[take]!.known?.[f] ?? 0);
}

function picked(frequencies: readonly number[]): Set<number> {
  const count = Math.min(MOST_FREQUENCIES, frequencies.length);
  return new Set(
    Array.from({ length: count }, (_, k) => frequencies[Math.floor(((k + 0.5) * frequencies.length) / count)]!),
  );
}

function onAllTakes(vector: Float64Array, takes: readonly number[], count: number): Float64Array {
  if (takes.length === count) return vector;
  const whole = new Float64Array(count);
  takes.forEach((take, r) => {
    whole[take] = vector[r]!;
  });
  return whole;
}

function innerProducts(vectors: readonly Float64Array[]): Float64Array {
  const count = vectors.length;
  const products = new Float64Array(count * count);
  for (let f = 0; f < count; f++) {
    const a = vectors[f]!;
    for (let g = f; g < count; g++) {
      const b = vectors[g]!;
      let sum = 0;
      for (let r = 0; r < a.length; r++) sum += a[r]! * b[r]!;
      products[f * count + g] = sum;
      products[g * count + f] = sum;
    }
  }
  return products;
}

function sumOfSquares(vector: Float64Array): number {
  let sum = 0;
  for (let r = 0; r < vector.length; r++) sum += vector[r]! * vector[r]!;
  return sum;
}

function mostCommon(patterns: readonly number[]): number {
  const counts = new Map<number, number>();
  for (const pattern of patterns) counts.set(pattern, (counts.get(pattern) ?? 0) + 1);
  return [...counts].reduce((best, entry) => (entry[1] > best[1] ? entry : best), [-1, 0] as [number, number])[0];
}
