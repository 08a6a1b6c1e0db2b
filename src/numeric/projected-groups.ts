import { type GroupedProjection, type Grouping, rowSums } from './grouped-projection.ts';

/**
 * What a projection Π leaves of the indicator vectors z of some groups: zᵀ Π z' = own part (only where z and z' lie in the
 * same group of the projection) + inner product of the dense parts.
 */
export interface ProjectedGroups {
  /** Group of the projection that holds each indicator; −1 where the projection has no groups. */
  readonly holder: Int32Array;
  /** Rows in the indicator, over the root of the rows in its holder. */
  readonly own: Float64Array;
  /** Row-major, a row an indicator. */
  readonly dense: Float64Array;
  readonly width: number;
}

/**
 * @param members groups, each inside a single group of the projection.
 * Cost: groups × kept columns².
 */
export function projectedGroups(projection: GroupedProjection, members: Grouping): ProjectedGroups {
  const { rows, groups, kept, place, factor } = projection;
  const count = members.sizes.length;
  const width = kept.length;
  const holder = new Int32Array(count).fill(-1);
  const own = new Float64Array(count);
  if (groups !== undefined) {
    members.of.forEach((member, r) => {
      holder[member] = groups.of[r]!;
    });
    for (let g = 0; g < count; g++) own[g] = members.sizes[g]! / Math.sqrt(groups.sizes[holder[g]!]!);
  }
  const dense = new Float64Array(count * width);
  if (width === 0) return { holder, own, dense, width };
  const sums = rowSums(rows, members);
  const means = groups === undefined ? undefined : rowSums(rows, groups);
  for (let g = 0; g < count; g++) {
    const vector = dense.subarray(g * width, (g + 1) * width);
    for (let i = sums.start[g]!; i < sums.start[g + 1]!; i++) {
      const k = place[sums.column[i]!]!;
      if (k >= 0) vector[k]! += sums.factor[i]!;
    }
    if (means !== undefined) {
      const share = members.sizes[g]! / groups!.sizes[holder[g]!]!;
      for (let i = means.start[holder[g]!]!; i < means.start[holder[g]! + 1]!; i++) {
        const k = place[means.column[i]!]!;
        if (k >= 0) vector[k]! -= share * means.factor[i]!;
      }
    }
    // Forward substitution: the dense part is L⁻¹ times the (centred) columns' products with the indicator.
    for (let k = 0; k < width; k++) {
      let sum = vector[k]!;
      for (let m = 0; m < k; m++) sum -= factor[k * width + m]! * vector[m]!;
      vector[k] = sum / factor[k * width + k]!;
    }
  }
  return { holder, own, dense, width };
}

/** zᵀ Π z' of indicator g of `a` and indicator h of `b`, both seen through the same projection. */
export function projectedProduct(a: ProjectedGroups, g: number, b: ProjectedGroups, h: number): number {
  let sum = a.holder[g]! >= 0 && a.holder[g] === b.holder[h] ? a.own[g]! * b.own[h]! : 0;
  for (let k = 0; k < a.width; k++) sum += a.dense[g * a.width + k]! * b.dense[h * a.width + k]!;
  return sum;
}
