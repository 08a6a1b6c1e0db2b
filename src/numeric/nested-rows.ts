import type { NestedDesign } from './nested-anova.ts';

/** Variances of outer groups, of inner groups within them, and of readings within those. */
export interface NestedVariances {
  readonly outer: number;
  readonly inner: number;
  readonly within: number;
}

/** The rows of a nested design, kept columns only, laid out for its covariance. */
export interface NestedRows {
  readonly count: number;
  readonly columns: number;
  readonly start: Int32Array;
  readonly column: Int32Array;
  readonly factor: Float64Array;
  readonly outer: Int32Array;
  readonly inner: Int32Array;
  readonly outerCount: number;
  readonly innerCount: number;
  readonly outerOfInner: Int32Array;
  /** Readings in each inner group. */
  readonly sizes: Float64Array;
  /** An entry an outer group. */
  readonly blocks: readonly OuterBlock[];
  /** XᵀX. */
  readonly gram: Float64Array;
}

/** One outer group: the columns its rows touch, and its inner groups with the sums of their rows. */
interface OuterBlock {
  readonly columns: Int32Array;
  readonly inner: Int32Array;
  /** A row an inner group, a column one of `columns`. */
  readonly sums: Float64Array;
}

/** @param place for each column its place among those kept, or −1. */
export function nestedRows({ fixed, outer, inner }: NestedDesign, place: Int32Array): NestedRows {
  const count = outer.length;
  const columns = place.reduce((most, k) => Math.max(most, k + 1), 0);
  const start = new Int32Array(count + 1);
  const column: number[] = [];
  const factor: number[] = [];
  const gram = new Float64Array(columns * columns);
  for (let r = 0; r < count; r++) {
    for (let i = fixed.start[r]!; i < fixed.start[r + 1]!; i++) {
      const k = place[fixed.column[i]!]!;
      if (k < 0) continue;
      column.push(k);
      factor.push(fixed.factor[i]!);
    }
    start[r + 1] = column.length;
    for (let i = start[r]!; i < start[r + 1]!; i++) {
      for (let j = start[r]!; j < start[r + 1]!; j++)
        gram[column[i]! * columns + column[j]!]! += factor[i]! * factor[j]!;
    }
  }
  const innerCount = inner.reduce((most, g) => Math.max(most, g + 1), 0);
  const outerCount = outer.reduce((most, g) => Math.max(most, g + 1), 0);
  const sums = Array.from({ length: innerCount }, () => new Map<number, number>());
  const sizes = new Float64Array(innerCount);
  const outerOfInner = new Int32Array(innerCount);
  for (let r = 0; r < count; r++) {
    const group = inner[r]!;
    sizes[group]! += 1;
    outerOfInner[group] = outer[r]!;
    for (let i = start[r]!; i < start[r + 1]!; i++) {
      sums[group]!.set(column[i]!, (sums[group]!.get(column[i]!) ?? 0) + factor[i]!);
    }
  }
  const members = Array.from({ length: outerCount }, () => [] as number[]);
  outerOfInner.forEach((p, group) => {
    members[p]!.push(group);
  });
  return {
    count,
    columns,
    start,
    column: Int32Array.from(column),
    factor: Float64Array.from(factor),
    outer,
    inner,
    outerCount,
    innerCount,
    outerOfInner,
    sizes,
    blocks: members.map((own) => blockOf(own, sums)),
    gram,
  };
}

function blockOf(inner: readonly number[], sums: readonly ReadonlyMap<number, number>[]): OuterBlock {
  const columns = [...new Set(inner.flatMap((group) => [...sums[group]!.keys()]))];
  return {
    columns: Int32Array.from(columns),
    inner: Int32Array.from(inner),
    sums: Float64Array.from(inner.flatMap((group) => columns.map((k) => sums[group]!.get(k) ?? 0))),
  };
}

/** For one step: tr(V⁻¹ Z Zᵀ), and XᵀV⁻¹ Z ZᵀV⁻¹X. */
interface Derivative {
  readonly trace: number;
  readonly normal: Float64Array;
}

/** A nested design under some variances: V = σ²(outer) P Pᵀ + σ²(inner) S Sᵀ + σ²(within) I. */
export interface WeighedRows {
  /** 1 / (σ²(within) + n σ²(inner)) of each inner group of n readings. */
  readonly g: Float64Array;
  /** What σ²(outer) takes off in each outer group: σ² / (1 + σ² Σ n g). */
  readonly h: Float64Array;
  readonly logDeterminant: number;
  /** XᵀV⁻¹X, row-major. */
  readonly normal: Float64Array;
  readonly derivatives: { readonly outer: Derivative; readonly inner: Derivative; readonly within: Derivative };
}

/**
 * All that depends on the design and the variances alone. Each outer group is inverted by the matrix inversion lemma, once
 * for its inner groups and once for itself. Cost: inner groups × columns they touch², plus columns².
 * Source: Searle, Casella & McCulloch, Variance Components, 1992, appendix M (inverse of a nested covariance; recalled
 * from memory, and held to the dense `reml` in the tests).
 */
export function weighNested(rows: NestedRows, variances: NestedVariances): WeighedRows {
  const { columns, sizes, blocks, gram } = rows;
  const { outer: ofOuter, inner: ofInner, within } = variances;
  const g = sizes.map((n) => 1 / (within + n * ofInner));
  const h = new Float64Array(blocks.length);
  const normal = gram.map((entry) => entry / within);
  const outerNormal = new Float64Array(columns * columns);
  const innerNormal = new Float64Array(columns * columns);
  const withinNormal = gram.map((entry) => entry / within ** 2);
  let [outerTrace, innerTrace, withinTrace, logDeterminant] = [0, 0, 0, 0];
  blocks.forEach((block, p) => {
    const width = block.columns.length;
    // Σ g · row sum, Σ g² · row sum, Σ n g, Σ n g² over the inner groups.
    const w = new Float64Array(width);
    const w2 = new Float64Array(width);
    let [weight, squareWeight] = [0, 0];
    block.inner.forEach((s, i) => {
      const [n, gs] = [sizes[s]!, g[s]!];
      weight += n * gs;
      squareWeight += n * gs * gs;
      logDeterminant += (n - 1) * Math.log(within) - Math.log(gs);
      for (let k = 0; k < width; k++) {
        w[k]! += gs * block.sums[i * width + k]!;
        w2[k]! += gs * gs * block.sums[i * width + k]!;
      }
    });
    const taken = ofOuter / (1 + ofOuter * weight);
    h[p] = taken;
    const left = 1 - taken * weight;
    outerTrace += weight * left;
    withinTrace -= taken * squareWeight;
    logDeterminant += Math.log(1 + ofOuter * weight);
    for (let k = 0; k < width; k++) {
      for (let l = 0; l < width; l++) {
        const cell = block.columns[k]! * columns + block.columns[l]!;
        normal[cell]! -= taken * w[k]! * w[l]!;
        outerNormal[cell]! += left * left * w[k]! * w[l]!;
        withinNormal[cell]! += taken * (taken * squareWeight * w[k]! * w[l]! - w2[k]! * w[l]! - w[k]! * w2[l]!);
      }
    }
    block.inner.forEach((s, i) => {
      const [n, gs] = [sizes[s]!, g[s]!];
      const share = ofInner * gs;
      innerTrace += n * gs - taken * (n * gs) ** 2;
      withinTrace += (n - share * n) / within;
      for (let k = 0; k < width; k++) {
        const a = block.sums[i * width + k]!;
        const seenA = gs * (a - taken * n * w[k]!);
        for (let l = 0; l < width; l++) {
          const b = block.sums[i * width + l]!;
          const cell = block.columns[k]! * columns + block.columns[l]!;
          normal[cell]! -= (share / within) * a * b;
          withinNormal[cell]! += ((n * share * share - 2 * share) / within ** 2) * a * b;
          innerNormal[cell]! += seenA * gs * (b - taken * n * w[l]!);
        }
      }
    });
  });
  return {
    g,
    h,
    logDeterminant,
    normal,
    derivatives: {
      outer: { trace: outerTrace, normal: outerNormal },
      inner: { trace: innerTrace, normal: innerNormal },
      within: { trace: withinTrace, normal: withinNormal },
    },
  };
}

/** Room for a number a group, so that none is asked for in the innermost loop. */
export interface NestedScratch {
  readonly inner: Float64Array;
  readonly outer: Float64Array;
}

/** V⁻¹ y, written into `into` (not `y` itself). Cost: linear. */
export function solveNested(
  rows: NestedRows,
  { g, h }: WeighedRows,
  { inner: ofInner, within }: NestedVariances,
  y: Float64Array,
  into: Float64Array,
  scratch: NestedScratch,
): void {
  const { count, inner, outerOfInner, innerCount } = rows;
  const sums = scratch.inner.fill(0);
  for (let r = 0; r < count; r++) sums[inner[r]!]! += y[r]!;
  const outerSums = scratch.outer.fill(0);
  for (let s = 0; s < innerCount; s++) outerSums[outerOfInner[s]!]! += g[s]! * sums[s]!;
  // From here a sum is what is taken off each reading of its inner group.
  for (let s = 0; s < innerCount; s++) {
    const p = outerOfInner[s]!;
    sums[s] = (g[s]! * ofInner * sums[s]!) / within + g[s]! * h[p]! * outerSums[p]!;
  }
  for (let r = 0; r < count; r++) into[r] = y[r]! / within - sums[inner[r]!]!;
}
