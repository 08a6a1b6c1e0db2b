import { fUpper } from '../numeric/f-distribution.ts';
import {
  type GroupedProjection,
  groupedProjection,
  grouping,
  projectionResiduals,
  type SparseRows,
} from '../numeric/grouped-projection.ts';

/** A design whose rows fall into groups that the columns explain alike, made ready for any response. */
export interface LackOfFitDesign {
  readonly columns: GroupedProjection;
  readonly groups: GroupedProjection;
  /** Degrees of freedom between groups beyond the columns, and within groups. */
  readonly lackDof: number;
  readonly pureDof: number;
}

/** Two mean squares, the first of which is no larger than the second but for chance where the model holds. */
export interface LackOfFitTest {
  readonly lackOfFit: number;
  readonly lackDof: number;
  readonly pureError: number;
  readonly pureDof: number;
  /** NaN where one of them has no degrees of freedom, as p is; infinite where pure error is 0. */
  readonly f: number;
  readonly pValue: number;
}

/** @param group of each row, numbered from 0 without holes; rows of a group have the same entries. */
export function lackOfFitDesign(rows: SparseRows, group: Int32Array): LackOfFitDesign {
  const columns = groupedProjection(rows, undefined);
  const groups = groupedProjection({ ...rows, columns: 0, start: new Int32Array(rows.start.length) }, grouping(group));
  return { columns, groups, lackDof: groups.rank - columns.rank, pureDof: group.length - groups.rank };
}

/** The part of a response that lies between groups beyond the columns, and the part within groups. */
export function splitMisfit(design: LackOfFitDesign, y: Float64Array): { lack: Float64Array; pure: Float64Array } {
  const pure = new Float64Array(y.length);
  projectionResiduals(design.groups, y, pure);
  const lack = new Float64Array(y.length);
  projectionResiduals(design.columns, y, lack);
  for (let r = 0; r < y.length; r++) lack[r] = lack[r]! - pure[r]!;
  return { lack, pure };
}

/**
 * Lack of fit against pure error. Source: Kutner et al., Applied Linear Statistical Models, 5th ed., section 3.7.
 * Sums of squares and their degrees of freedom, which may be fractional (an effective number).
 */
export function lackOfFitTest(lackOfFit: number, lackDof: number, pureError: number, pureDof: number): LackOfFitTest {
  const sums = { lackOfFit, lackDof, pureError, pureDof };
  if (!(lackDof > 0 && pureDof > 0) || lackOfFit + pureError === 0)
    return { ...sums, f: Number.NaN, pValue: Number.NaN };
  const f = lackOfFit / lackDof / (pureError / pureDof);
  return { ...sums, f, pValue: f === Number.POSITIVE_INFINITY ? 0 : fUpper(f, lackDof, pureDof) };
}
