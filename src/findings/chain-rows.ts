import type { SparseRows } from '../numeric/grouped-projection.ts';
import type { MergedChain } from './merged-chains.ts';

/** The links of some chains as a sparse matrix, a row a chain; columns are the links that occur. */
export function chainRows(chains: readonly Pick<MergedChain, 'links' | 'factors'>[]): SparseRows {
  const columnOf = new Map<number, number>();
  const start = [0];
  const column: number[] = [];
  const factor: number[] = [];
  for (const { links, factors } of chains) {
    links.forEach((link, k) => {
      const known = columnOf.get(link);
      if (known === undefined) columnOf.set(link, columnOf.size);
      column.push(known ?? columnOf.size - 1);
      factor.push(factors[k]!);
    });
    start.push(column.length);
  }
  return {
    start: Int32Array.from(start),
    column: Int32Array.from(column),
    factor: Float64Array.from(factor),
    columns: columnOf.size,
  };
}
