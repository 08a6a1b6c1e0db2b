import type { Part } from './separability.ts';

/** A tie between two nodes (or of a node with itself, for a twin reading). */
export type Edge = readonly [number, number];

/**
 * Finds the connected parts of a graph of `nodes` nodes, and in each its two sides or a shortest odd loop.
 * A part's node values can be found from sums along edges if and only if it holds an odd loop or a known node:
 * the multiplicity of the eigenvalue 0 of the signless Laplacian is the number of bipartite components
 * (Cvetković, Rowlinson & Simić 2007, Linear Algebra and its Applications 423, 155–171).
 */
export function partsOf(nodes: number, edges: readonly Edge[], known: ReadonlySet<number>): Part[] {
  const neighbours = neighbourLists(nodes, edges);
  const side = new Int8Array(nodes).fill(-1);
  const parts: Part[] = [];
  for (let start = 0; start < nodes; start++) {
    if (side[start] !== -1) continue;
    const members = [start];
    let odd = false;
    side[start] = 0;
    for (let head = 0; head < members.length; head++) {
      const node = members[head]!;
      for (const other of neighbours[node]!) {
        if (side[other] === -1) {
          side[other] = (1 - side[node]!) as 0 | 1;
          members.push(other);
        } else if (side[other] === side[node]) odd = true;
      }
    }
    members.sort((a, b) => a - b);
    const knownHere = members.filter((node) => known.has(node));
    const solvable = odd || knownHere.length > 0;
    parts.push({
      links: members,
      sides: solvable
        ? undefined
        : [
            members.filter((node) => side[node] === side[members[0]!]),
            members.filter((node) => side[node] !== side[members[0]!]),
          ],
      oddLoop: odd ? shortestOddLoop(members, neighbours) : undefined,
      known: knownHere,
    });
  }
  return parts;
}

function neighbourLists(nodes: number, edges: readonly Edge[]): number[][] {
  const sets = Array.from({ length: nodes }, () => new Set<number>());
  for (const [a, b] of edges) {
    sets[a]!.add(b);
    sets[b]!.add(a);
  }
  return sets.map((set) => [...set].sort((a, b) => a - b));
}

/** Starts tried for a short loop: the loop is for a reader, so that in large parts a nearly shortest one will do. */
const LOOP_STARTS = 60;

// A shortest walk from (v, even) to (v, odd) in the graph's double cover is a shortest odd loop through v.
function shortestOddLoop(members: readonly number[], neighbours: readonly (readonly number[])[]): number[] {
  let best: number[] | undefined;
  for (const start of members.slice(0, LOOP_STARTS)) {
    const loop = oddLoopThrough(start, neighbours, best?.length ?? Number.POSITIVE_INFINITY);
    if (loop !== undefined) best = loop;
    if (best !== undefined && best.length <= 1) break;
  }
  return best ?? [];
}

function oddLoopThrough(
  start: number,
  neighbours: readonly (readonly number[])[],
  below: number,
): number[] | undefined {
  const cameFrom = new Map<number, number>([[2 * start, -1]]);
  let ring = [2 * start];
  for (let length = 1; ring.length > 0 && length < below; length++) {
    const next: number[] = [];
    for (const state of ring) {
      for (const other of neighbours[state >> 1]!) {
        const reached = 2 * other + (1 - (state & 1));
        if (cameFrom.has(reached)) continue;
        cameFrom.set(reached, state);
        if (reached === 2 * start + 1) return walkBack(reached, cameFrom);
        next.push(reached);
      }
    }
    ring = next;
  }
  return undefined;
}

function walkBack(end: number, cameFrom: ReadonlyMap<number, number>): number[] {
  const loop: number[] = [];
  for (let state = cameFrom.get(end)!; state !== -1; state = cameFrom.get(state)!) loop.push(state >> 1);
  return loop.reverse();
}
