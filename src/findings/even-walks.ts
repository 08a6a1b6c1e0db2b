import { groupedProjection } from '../numeric/grouped-projection.ts';
import { chainRows } from './chain-rows.ts';
import type { MergedChain } from './merged-chains.ts';

/** A sum of chains, with alternating signs around an even closed walk, in which all links cancel. */
export interface EvenWalk {
  /** Indices of chains in the order of the walk, each once, with the factor it has in the sum (±2 where it is walked twice). */
  readonly terms: readonly { readonly chain: number; readonly factor: number }[];
}

export interface EvenWalks {
  /** Independent of each other. */
  readonly walks: readonly EvenWalk[];
  /** How many independent sums there are in all: chains less the rank of their links. */
  readonly independent: number;
}

/**
 * Independent even closed walks, short ones preferred. Chains are taken one after the other, response by response, each
 * next response being the one with most chains to those before it; a chain that closes something with the chains before
 * it gives the shortest even walk through itself. Every walk so has a last chain of its own, and they are independent.
 * The walks are as many as there are independent sums, unless paths or gains cancel only in sums that are no single walk,
 * or in longer ones than are looked for, or `most` are found.
 * An even closed walk is a closed walk in the graph's double cover, which holds every response once for each parity.
 * Source: signless Laplacian and even walks, Cvetković, Rowlinson & Simić 2007, Linear Algebra and its Applications 423,
 * 155–171 (recalled from memory); order of the responses: maximum cardinality search, Tarjan & Yannakakis 1984, SIAM J.
 * Comput. 13, 566–579 (recalled from memory).
 * Cost: a breadth-first search of the chains for each chain.
 */
export function evenWalks(chains: readonly MergedChain[], most: number): EvenWalks {
  const independent = chains.length - groupedProjection(chainRows(chains), undefined).rank;
  const labels = labelSums(chains);
  const at = new Map<number, number[]>();
  const walks: EvenWalk[] = [];
  for (const chain of inOrder(chains)) {
    if (walks.length >= Math.min(most, independent)) break;
    for (const end of new Set(chains[chain]!.ends)) at.set(end, [...(at.get(end) ?? []), chain]);
    const walk = shortestThrough(chain, chains, at, labels);
    if (walk !== undefined) walks.push({ terms: termsOf(walk) });
  }
  return { walks, independent };
}

/** The chains, by the later and then by the earlier of their responses. */
function inOrder(chains: readonly MergedChain[]): number[] {
  const position = responseOrder(chains);
  const places = chains.map(({ ends: [a, b] }) => {
    const [x, y] = [position.get(a)!, position.get(b)!];
    return [Math.max(x, y), Math.min(x, y)] as const;
  });
  return [...chains.keys()].sort((i, j) => places[i]![0] - places[j]![0] || places[i]![1] - places[j]![1] || i - j);
}

function responseOrder(chains: readonly MergedChain[]): Map<number, number> {
  const neighbours = new Map<number, Set<number>>();
  for (const { ends } of chains) {
    for (const [here, there] of [ends, [ends[1], ends[0]] as const]) {
      const own = neighbours.get(here) ?? new Set<number>();
      neighbours.set(here, own.add(there));
    }
  }
  const position = new Map<number, number>();
  const before = new Map([...neighbours.keys()].map((node) => [node, 0]));
  while (position.size < neighbours.size) {
    let next = -1;
    for (const [node, count] of before) {
      if (next < 0) next = node;
      const lead = count - before.get(next)! || neighbours.get(node)!.size - neighbours.get(next)!.size;
      if (lead > 0) next = node;
    }
    position.set(next, position.size);
    before.delete(next);
    for (const node of neighbours.get(next)!) if (before.has(node)) before.set(node, before.get(node)! + 1);
  }
  return position;
}

interface Step {
  readonly chain: number;
  readonly sign: 1 | -1;
}

interface Reached extends Step {
  readonly node: number;
  readonly label: number;
  readonly from: Reached | undefined;
}

/** States of one search where paths or gains are told apart: walks that need more are long, and are left out. */
const MOST_STATES = 5000;

/**
 * The shortest even closed walk through a chain that never takes it with the other sign, so that it stays in the sum.
 * Every second step has the sign −.
 */
function shortestThrough(
  own: number,
  chains: readonly MergedChain[],
  at: ReadonlyMap<number, readonly number[]>,
  labels: LabelSums,
): Step[] | undefined {
  const [home, first] = chains[own]!.ends;
  const seen = new Set<string | number>();
  let ring: Reached[] = [{ chain: own, sign: 1, node: first, label: labels.plus(NO_LABEL, own, 1), from: undefined }];
  let states = 1;
  for (let sign: 1 | -1 = -1; ring.length > 0; sign = sign === 1 ? -1 : 1) {
    const next: Reached[] = [];
    for (const from of ring) {
      for (const chain of at.get(from.node)!) {
        if (chain === own && sign === -1) continue;
        const { ends } = chains[chain]!;
        const node = ends[0] === from.node ? ends[1] : ends[0];
        const label = labels.plus(from.label, chain, sign);
        if (label === TOO_MANY) continue;
        const reached = { chain, sign, node, label, from };
        if (sign === -1 && node === home && label === NO_LABEL) return stepsTo(reached);
        const key = labels.count === 0 ? 2 * node + (sign + 1) / 2 : `${node} ${sign} ${label}`;
        if (seen.has(key)) continue;
        seen.add(key);
        next.push(reached);
      }
    }
    states += next.length;
    if (labels.count > 0 && states > MOST_STATES) return undefined;
    ring = next;
  }
  return undefined;
}

function stepsTo(end: Reached): Step[] {
  const steps: Step[] = [];
  for (let at: Reached | undefined = end; at !== undefined; at = at.from)
    steps.push({ chain: at.chain, sign: at.sign });
  return steps.reverse();
}

/** Sums up what is walked twice, and starts at the chain that comes first in the input, with the sign +. */
function termsOf(steps: readonly Step[]): EvenWalk['terms'] {
  const sums = new Map<number, number>();
  for (const { chain, sign } of steps) sums.set(chain, (sums.get(chain) ?? 0) + sign);
  const first = Math.min(...[...sums].filter(([, sum]) => sum !== 0).map(([chain]) => chain));
  const start = steps.findIndex(({ chain }) => chain === first);
  const turned = [...steps.slice(start), ...steps.slice(0, start)].map(({ chain }) => chain);
  const sign = Math.sign(sums.get(first)!);
  return [...new Set(turned)]
    .map((chain) => ({ chain, factor: sign * sums.get(chain)! }))
    .filter(({ factor }) => factor !== 0);
}

/** Sums of paths and gains along a walk, by number. */
interface LabelSums {
  /** Number of labels that can differ; 0 where all chains have the same, which an even walk always cancels. */
  readonly count: number;
  readonly plus: (sum: number, chain: number, sign: 1 | -1) => number;
}

const NO_LABEL = 0;
const TOO_MANY = -1;
/** A walk on which more labels than this are open at once, for each kind of label, is left out. */
const MOST_OPEN = 3;

function labelSums(chains: readonly MergedChain[]): LabelSums {
  const kinds = new Set(chains.map(({ labels }) => labels.join()));
  if (kinds.size < 2) return { count: 0, plus: () => NO_LABEL };
  const most = MOST_OPEN * Math.max(...chains.map(({ labels }) => labels.length));
  const sums: ReadonlyMap<number, number>[] = [new Map()];
  const numbers = new Map<string, number>([['', NO_LABEL]]);
  const known = new Map<string, number>();
  const plus = (sum: number, chain: number, sign: 1 | -1): number => {
    const { labels } = chains[chain]!;
    const step = `${sum} ${sign} ${labels.join()}`;
    const before = known.get(step);
    if (before !== undefined) return before;
    const total = new Map(sums[sum]);
    for (const label of labels) {
      const value = (total.get(label) ?? 0) + sign;
      if (value === 0) total.delete(label);
      else total.set(label, value);
    }
    const open = [...total.values()].reduce((all, value) => all + Math.abs(value), 0);
    const key = [...total].sort(([a], [b]) => a - b).join(';');
    const number = open > most ? TOO_MANY : (numbers.get(key) ?? sums.length);
    if (number === sums.length) {
      numbers.set(key, number);
      sums.push(total);
    }
    known.set(step, number);
    return number;
  };
  return { count: kinds.size, plus };
}
