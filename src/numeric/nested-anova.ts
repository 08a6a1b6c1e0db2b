import {
  type GroupedProjection,
  type Grouping,
  groupedProjection,
  grouping,
  projectionResiduals,
  type SparseRows,
} from './grouped-projection.ts';
import { type ProjectedGroups, projectedGroups, projectedProduct } from './projected-groups.ts';

/** Readings in inner groups (same seating) within outer groups (same pair), and the columns that are to explain the outer groups. */
export interface NestedDesign {
  readonly fixed: SparseRows;
  /** Group of each row, numbered from 0 without holes. */
  readonly outer: Int32Array;
  /** Each inner group lies in a single outer group. */
  readonly inner: Int32Array;
}

/** A number for each stratum: within inner groups, between inner groups of an outer group, outer groups beyond the columns. */
export interface PerStratum<T> {
  readonly within: T;
  readonly inner: T;
  readonly outer: T;
}

/**
 * The analysis of variance of a nested design, for any response. Expected sums of squares:
 * within: dof σ²; inner: dof σ² + innerOfInner σ²(inner); outer: dof σ² + outerOfInner σ²(inner) + outerOfOuter σ²(outer).
 */
export interface NestedAnova {
  readonly outer: Grouping;
  readonly inner: Grouping;
  readonly dof: PerStratum<number>;
  readonly innerOfInner: number;
  readonly outerOfInner: number;
  readonly outerOfOuter: number;
  /** All outer groups alike, all inner groups alike, and no column that varies within an outer group: then every stratum has a single variance. */
  readonly balanced: boolean;
  readonly projections: {
    readonly columns: GroupedProjection;
    readonly outer: GroupedProjection;
    readonly inner: GroupedProjection;
  };
}

/**
 * Prepares the analysis: degrees of freedom by rank, expected sums of squares by traces. Strata are differences of nested
 * projections (columns ⊂ columns + outer groups ⊂ columns + inner groups), so that fixed columns drop out exactly.
 * Source: Henderson's method III, as in Searle, Casella & McCulloch, Variance Components, 1992, section 5.5 (section
 * number recalled from memory). Cost: columns³ / 6 + groups × columns².
 */
export function nestedAnova({ fixed, outer: outerOf, inner: innerOf }: NestedDesign): NestedAnova {
  const [outer, inner] = [grouping(outerOf), grouping(innerOf)];
  const projections = {
    columns: groupedProjection(fixed, undefined),
    outer: groupedProjection(fixed, outer),
    inner: groupedProjection(fixed, inner),
  };
  const dof = {
    within: outerOf.length - projections.inner.rank,
    inner: projections.inner.rank - projections.outer.rank,
    outer: projections.outer.rank - projections.columns.rank,
  };
  const innerThroughOuter =
    dof.inner > 0 || dof.outer > 0 ? sumOfSquares(projectedGroups(projections.outer, inner)) : 0;
  const rows = outerOf.length;
  return {
    outer,
    inner,
    dof,
    // A stratum without freedom has no expectation either: what is left of the difference is rounding.
    innerOfInner: dof.inner > 0 ? rows - innerThroughOuter : 0,
    outerOfInner: dof.outer > 0 ? innerThroughOuter - sumOfSquares(projectedGroups(projections.columns, inner)) : 0,
    outerOfOuter: dof.outer > 0 ? sumOfSquares(outer) - sumOfSquares(projectedGroups(projections.columns, outer)) : 0,
    balanced: allEqual(outer.sizes) && allEqual(inner.sizes) && projections.outer.kept.length === 0,
    projections,
  };
}

/** Splits a response into its parts in the three strata; their squares sum to the sums of squares. Writes into the arrays given. */
export function splitIntoStrata(anova: NestedAnova, y: Float64Array, into: PerStratum<Float64Array>): void {
  const { columns, outer, inner } = anova.projections;
  projectionResiduals(columns, y, into.outer);
  projectionResiduals(outer, into.outer, into.inner);
  projectionResiduals(inner, into.inner, into.within);
  for (let r = 0; r < y.length; r++) {
    into.outer[r]! -= into.inner[r]!;
    into.inner[r]! -= into.within[r]!;
  }
}

/** Σ over all pairs of groups of (zᵀ A z')², A the projection of a stratum: what the spread of unequal variances in it rests on. */
export interface SquaredTraces {
  readonly innerInner: number;
  readonly outerInner: number;
  readonly outerCross: number;
  readonly outerOuter: number;
}

/** Cost: groups² × columns; not needed for a balanced design. */
export function squaredTraces(anova: NestedAnova): SquaredTraces {
  const { columns, outer, inner } = anova.projections;
  const through = (projection: GroupedProjection) => ({
    outer: projectedGroups(projection, anova.outer),
    inner: projectedGroups(projection, anova.inner),
  });
  const [byColumns, byOuter, byInner] = [through(columns), through(outer), through(inner)];
  return {
    innerInner: squaredDifferences(byInner.inner, byInner.inner, byOuter.inner, byOuter.inner),
    outerInner: squaredDifferences(byOuter.inner, byOuter.inner, byColumns.inner, byColumns.inner),
    outerCross: squaredDifferences(byOuter.outer, byOuter.inner, byColumns.outer, byColumns.inner),
    outerOuter: squaredDifferences(byOuter.outer, byOuter.outer, byColumns.outer, byColumns.outer),
  };
}

function squaredDifferences(a: ProjectedGroups, b: ProjectedGroups, c: ProjectedGroups, d: ProjectedGroups): number {
  let sum = 0;
  for (let g = 0; g < a.own.length; g++) {
    for (let h = 0; h < b.own.length; h++) sum += (projectedProduct(a, g, b, h) - projectedProduct(c, g, d, h)) ** 2;
  }
  return sum;
}

function sumOfSquares(groups: ProjectedGroups | Grouping): number {
  if ('sizes' in groups) return groups.sizes.reduce((sum, size) => sum + size, 0);
  return groups.own.reduce((sum, v) => sum + v * v, 0) + groups.dense.reduce((sum, v) => sum + v * v, 0);
}

function allEqual(values: Float64Array): boolean {
  return values.every((value) => value === values[0]);
}
