import type { Model } from '../model/model.ts';

/**
 * The chains of some takes as flat arrays: row r belongs to take `take[r]` and has its entries from `start[r]` to
 * `start[r + 1]`. Gains, which all frequencies share, stand apart: `gain[r]` is an index into the gain links, or −1.
 */
export interface Incidence {
  readonly take: Int32Array;
  readonly start: Int32Array;
  readonly link: Int32Array;
  readonly factor: Float64Array;
  readonly gain: Int32Array;
}

export function incidenceOf(model: Model, takes: readonly number[]): Incidence {
  const start = new Int32Array(takes.length + 1);
  const gain = new Int32Array(takes.length).fill(-1);
  const links: number[] = [];
  const factors: number[] = [];
  takes.forEach((take, r) => {
    const chain = model.chains[take]!;
    chain.links.forEach((link, k) => {
      if (link >= model.linksPerFrequency) gain[r] = link - model.linksPerFrequency;
      else {
        links.push(link);
        factors.push(chain.factors[k]!);
      }
    });
    start[r + 1] = links.length;
  });
  return {
    take: Int32Array.from(takes),
    start,
    link: Int32Array.from(links),
    factor: Float64Array.from(factors),
    gain,
  };
}
