import { expect, test } from 'vitest';
import { effectiveCount } from '../../src/numeric/effective-count.ts';
import { randomStream } from '../../src/numeric/random.ts';
import { smoothSeries } from './smooth-series.ts';

function productsOf(series: readonly Float64Array[]): Float64Array {
  const count = series[0]!.length;
  return Float64Array.from({ length: count * count }, (_, cell) =>
    series.reduce((sum, values) => sum + values[Math.floor(cell / count)]! * values[cell % count]!, 0),
  );
}

const sameFor = (count: number, series: number) => new Float64Array(count).fill(series);

test('values that all say the same count as one, and a single value is one', () => {
  const series = [3, -1, 2, 0.5].map((value) => new Float64Array(12).fill(value));
  expect(effectiveCount(productsOf(series), sameFor(12, 4))).toBe(1);
  expect(effectiveCount(Float64Array.of(7), [3])).toBe(1);
  expect(effectiveCount(new Float64Array(9), [2, 2, 2])).toBe(1);
});

test('a variance that sits in one value only makes the series worth little more than one', () => {
  const stream = randomStream(3);
  const series = Array.from({ length: 40 }, () =>
    Float64Array.from({ length: 20 }, (_, f) => (f === 7 ? 50 : 1) * stream.normal()),
  );
  expect(effectiveCount(productsOf(series), sameFor(20, 40))).toBeLessThan(1.1);
});

test('independent values count in full, smooth ones by their correlation, whatever the number of series', () => {
  const [count, trials] = [40, 60];
  for (const width of [0, 2, 5]) {
    // The correlation of the smoothed series, squared and summed exactly.
    const correlation = (distance: number) =>
      width === 0 ? Number(distance === 0) : Math.exp(-(distance ** 2) / (2 * width ** 2));
    let squares = 0;
    for (let f = 0; f < count; f++) for (let g = 0; g < count; g++) squares += correlation(f - g) ** 2;
    const truth = count ** 2 / squares;
    for (const series of [1, 3, 15]) {
      const stream = randomStream(series, width);
      let mean = 0;
      for (let trial = 0; trial < trials; trial++) {
        const values = Array.from({ length: series }, () => smoothSeries(stream, count, width));
        mean += effectiveCount(productsOf(values), sameFor(count, series)) / trials;
      }
      // The smaller of two estimates leans to the safe side: up to a quarter low with few series, hardly ever high.
      expect(mean / truth, `width ${width}, ${series} series`).toBeGreaterThan(0.75);
      expect(mean / truth, `width ${width}, ${series} series`).toBeLessThan(1.1);
    }
  }
});
