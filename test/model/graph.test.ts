import { describe, expect, it } from 'vitest';
import { type Edge, partsOf } from '../../src/model/graph.ts';

const NOTHING: ReadonlySet<number> = new Set();
const cycle = (n: number): Edge[] => Array.from({ length: n }, (_, i) => [i, (i + 1) % n]);

describe('connected parts of a bench', () => {
  it('of nothing there are none; units without takes are parts of one, open', () => {
    expect(partsOf(0, [], NOTHING)).toEqual([]);
    const parts = partsOf(2, [], NOTHING);
    expect(parts.map(({ links, sides }) => [links, sides])).toEqual([
      [[0], [[0], []]],
      [[1], [[1], []]],
    ]);
  });

  it.each([3, 5, 7])('an odd ring of %d units is solvable, and its odd loop goes once round it', (n) => {
    const [part] = partsOf(n, cycle(n), NOTHING);
    expect(part!.sides).toBeUndefined();
    expect([...part!.oddLoop!].sort((a, b) => a - b)).toEqual([...Array(n).keys()]);
  });

  it.each([4, 6, 8])('an even ring of %d units is open, and its two sides alternate', (n) => {
    const [part] = partsOf(n, cycle(n), NOTHING);
    expect(part!.oddLoop).toBeUndefined();
    expect(part!.sides).toEqual([
      [...Array(n).keys()].filter((i) => i % 2 === 0),
      [...Array(n).keys()].filter((i) => i % 2 === 1),
    ]);
  });

  it('a twin reading is an odd loop of one unit and solves everything that hangs on it', () => {
    const [part] = partsOf(
      3,
      [
        [0, 1],
        [1, 2],
        [2, 2],
      ],
      NOTHING,
    );
    expect(part!.sides).toBeUndefined();
    expect(part!.oddLoop).toEqual([2]);
  });

  it('names a shortest odd loop where there are several', () => {
    // A ring of five with a chord that closes a triangle 0-1-2.
    const [part] = partsOf(5, [...cycle(5), [0, 2]], NOTHING);
    expect([...part!.oddLoop!].sort((a, b) => a - b)).toEqual([0, 1, 2]);
  });

  it('steps along an odd loop are takes, each of them', () => {
    const edges: Edge[] = [...cycle(7), [7, 0], [8, 7]];
    const loop = partsOf(9, edges, NOTHING)[0]!.oddLoop!;
    const tied = new Set(edges.flatMap(([a, b]) => [`${a} ${b}`, `${b} ${a}`]));
    loop.forEach((node, k) => {
      expect(tied.has(`${node} ${loop[(k + 1) % loop.length]}`)).toBe(true);
    });
    expect(loop.length % 2).toBe(1);
  });

  it('a known unit solves its own part without an odd loop, and no other part', () => {
    const edges: Edge[] = [
      [0, 1],
      [2, 3],
    ];
    const [one, other] = partsOf(4, edges, new Set([1]));
    expect([one!.sides, one!.oddLoop, one!.known]).toEqual([undefined, undefined, [1]]);
    expect(other!.sides).toEqual([[2], [3]]);
  });

  it('a pair taken many times is still one tie', () => {
    const [part] = partsOf(
      2,
      [
        [0, 1],
        [1, 0],
        [0, 1],
      ],
      NOTHING,
    );
    expect(part!.sides).toEqual([[0], [1]]);
  });
});
