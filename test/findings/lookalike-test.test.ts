import { expect, it } from 'vitest';
import { testLookalikes } from '../../src/findings/lookalike-test.ts';
import { DEFAULT_MODEL_OPTIONS } from '../../src/model/model-options.ts';
import { pairsOf, takeSetOf } from '../take-set-of.ts';

const HOW = { risk: 0.05, coverage: 0.95 };
const OPTIONS = { ...DEFAULT_MODEL_OPTIONS, model: 'reciprocal', lookalikes: [['A', 'B']] } as const;

const tested = (levels: Record<string, number>) =>
  testLookalikes(takeSetOf([1000], pairsOf(levels, { u: 0.1 })), OPTIONS, 'reciprocal', HOW);

it('declared look-alikes that differ by more than their U are told', async () => {
  // A = 5, B = 3, C = 1, D = 0.
  const [finding] = await tested({ 'A>B': 8, 'A>C': 6, 'B>C': 4, 'A>D': 5, 'B>D': 3, 'C>D': 1 });
  expect(finding).toMatchObject({ one: 'A', other: 'B', frequencies: 1, beyond: 1, verdict: 'differ' });
  expect(finding!.difference).toBeCloseTo(2, 9);
  // var(A − B) = 2 u² / (n − 2) = 0.01 for all pairs of four units; k = 1.959964.
  expect(finding!.expanded).toBeCloseTo(0.1959964, 6);
});

it('those that are alike agree', async () => {
  const [finding] = await tested({ 'A>B': 6, 'A>C': 4, 'B>C': 4, 'A>D': 3, 'B>D': 3, 'C>D': 1 });
  expect(finding).toMatchObject({ beyond: 0, verdict: 'agree' });
});

it('where the declaration is what makes the levels known, it cannot be tested', async () => {
  const [finding] = await tested({ 'A>B': 6 });
  expect(finding).toMatchObject({ frequencies: 0, verdict: 'not testable' });
  expect(finding!.difference).toBeNaN();
});

it('without a declaration there is nothing to test', async () => {
  const set = takeSetOf([1000], pairsOf({ 'A>B': 6 }, { u: 0.1 }));
  expect(await testLookalikes(set, DEFAULT_MODEL_OPTIONS, 'reciprocal', HOW)).toEqual([]);
});
