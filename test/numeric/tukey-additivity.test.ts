import { expect, test } from 'vitest';
import { leastSquaresByQr } from '../../src/numeric/dense.ts';
import { randomStream } from '../../src/numeric/random.ts';
import { tukeyAdditivity } from '../../src/numeric/tukey-additivity.ts';

const units = 6;
const pairs = Array.from({ length: units }, (_, i) => Array.from({ length: i }, (_, j) => [i, j] as const)).flat();
const rows = pairs.map(([i, j]) => Array.from({ length: units }, (_, k) => (k === i || k === j ? 1 : 0)));

function testOf(y: readonly number[]) {
  const { residuals, dof } = leastSquaresByQr(rows, y);
  const fitted = y.map((value, r) => value - residuals[r]!);
  return tukeyAdditivity({ fitted, residuals, dof }, (response) => leastSquaresByQr(rows, response).residuals);
}

test('pair sums that are compressed at the top have a negative slope and a small p', () => {
  const stream = randomStream(2);
  const level = Array.from({ length: units }, () => 6 * stream.normal());
  const additive = pairs.map(([i, j]) => level[i]! + level[j]!);
  const compressed = additive.map((value) => value - 0.01 * value * value + 0.02 * stream.normal());
  const { slope, slopeUncertainty, p } = testOf(compressed);
  expect(slope).toBeLessThan(0);
  expect(Math.abs(slope / slopeUncertainty)).toBeGreaterThan(5);
  expect(p).toBeLessThan(1e-3);
});

test('in additive sums with noise it alarms at its level', () => {
  const stream = randomStream(4);
  const level = Array.from({ length: units }, () => 6 * stream.normal());
  const trials = 600;
  let alarms = 0;
  for (let trial = 0; trial < trials; trial++) {
    if (testOf(pairs.map(([i, j]) => level[i]! + level[j]! + stream.normal())).p < 0.05) alarms++;
  }
  // Four sampling errors of a proportion of 0.05.
  expect(Math.abs(alarms / trials - 0.05)).toBeLessThan(4 * Math.sqrt((0.05 * 0.95) / trials));
});

test('no slope where the model absorbs it, or where a single degree of freedom is left', () => {
  const two = [
    [1, 0],
    [0, 1],
    [1, 1],
  ];
  const fit = leastSquaresByQr(two, [1, 2, 4]);
  const fitted = [1, 2, 4].map((value, r) => value - fit.residuals[r]!);
  const few = tukeyAdditivity({ ...fit, fitted }, (response) => leastSquaresByQr(two, response).residuals);
  expect(few.p).toBeNaN();
  expect(few.restDof).toBe(0);
  const flat = testOf(pairs.map(() => 3));
  expect(flat.p).toBeNaN();
});
