import { describe, expect, it } from 'vitest';
import { frequencyRange, frequencyScale, frequencyTicks } from '../../../src/report/figures/frequency-axis.ts';
import { levelAxis, ratioAxis } from '../../../src/report/figures/level-axis.ts';

const labels = (range: [number, number]) => frequencyTicks(range).map(({ label }) => label);
const ticksOf = (markup: string) => [...markup.matchAll(/class="tick end">([^<]*)</g)].map(([, text]) => text);

describe('the frequency axis', () => {
  it('ticks at 1, 2 and 5 with units, over decades and across the change of unit', () => {
    expect(labels([200, 20_000])).toEqual(['200 Hz', '500 Hz', '1 kHz', '2 kHz', '5 kHz', '10 kHz', '20 kHz']);
    expect(labels([40_000, 2_100_000])).toEqual(['50 kHz', '100 kHz', '200 kHz', '500 kHz', '1 MHz', '2 MHz']);
  });

  it('has ticks in between where it is too short for 1, 2 and 5', () => {
    expect(labels([60_000, 90_000]).length).toBeGreaterThanOrEqual(3);
    expect(new Set(labels([60_000, 90_000])).size).toBe(labels([60_000, 90_000]).length);
  });

  it('is logarithmic, and leaves room beside the first and the last frequency', () => {
    const range = frequencyRange([100, 1000, 10_000]);
    const scale = frequencyScale(range);
    // Three frequencies with half a step around them: at 1/6, 1/2 and 5/6; doubles on the way through a logarithm.
    for (const [k, frequency] of [100, 1000, 10_000].entries()) {
      expect(Math.abs(scale(frequency) - (2 * k + 1) / 6)).toBeLessThan(1e-12);
    }
  });

  it('shows a single frequency in its middle', () => {
    expect(Math.abs(frequencyScale(frequencyRange([1000]))(1000) - 0.5)).toBeLessThan(1e-12);
  });
});

describe('the level axis', () => {
  it('holds all values, has steps of 1, 2 or 5, and names its unit', () => {
    const axis = levelAxis([-13.2, -54.7], { height: 380, title: 'Level, dB' });
    expect(axis.domain[0]).toBeLessThanOrEqual(-54.7);
    expect(axis.domain[1]).toBeGreaterThanOrEqual(-13.2);
    expect(axis.markup).toContain('Level, dB');
    const values = ticksOf(axis.markup).map((text) => Number(text!.replace('\u2212', '-')));
    const step = values[1]! - values[0]!;
    expect([1, 2, 5].map((digit) => step / digit).some((rest) => Number.isInteger(Math.log10(rest)))).toBe(true);
  });

  it('starts at 0 for what cannot be negative, and is not empty for a flat curve or for none', () => {
    expect(levelAxis([0.3, 0.4], { height: 200, title: '', from: 0 }).domain[0]).toBe(0);
    for (const values of [[3, 3], [], [Number.NaN]]) {
      const { domain, y } = levelAxis(values, { height: 200, title: '' });
      expect(domain[1]).toBeGreaterThan(domain[0]);
      expect(Number.isFinite(y(values[0] ?? 0))).toBe(!Number.isNaN(values[0] ?? 0));
    }
  });

  it('with a ratio scale ticks at 1, 2 and 5, and gives no place to 0', () => {
    const axis = ratioAxis([0.12, 5.7, 0, Number.NaN], { height: 110, title: 'U, dB' });
    expect(ticksOf(axis.markup)).toEqual(['0.1', '0.2', '0.5', '1', '2', '5', '10']);
    expect(axis.y(0)).toBeNaN();
    expect(axis.y(0.1)).toBe(110);
  });
});
