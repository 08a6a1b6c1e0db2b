import { describe, expect, it } from 'vitest';
import { DARK, DASHES, LIGHT, seriesClass } from '../../../src/report/figures/palette.ts';

/** Relative luminance and contrast ratio. Source: WCAG 2.2, definitions of "relative luminance" and "contrast ratio". */
const luminance = (colour: string) => {
  const [r, g, b] = [1, 3, 5].map((at) => {
    const part = Number.parseInt(colour.slice(at, at + 2), 16) / 255;
    return part <= 0.04045 ? part / 12.92 : ((part + 0.055) / 1.055) ** 2.4;
  }) as [number, number, number];
  return 0.2126 * r + 0.7152 * g + 0.0722 * b;
};
const contrast = (one: string, other: string) => {
  const [high, low] = [luminance(one), luminance(other)].sort((a, b) => b - a) as [number, number];
  return (high + 0.05) / (low + 0.05);
};

describe.each([
  ['light', LIGHT],
  ['dark', DARK],
])('the %s colours', (_, theme) => {
  it('stand out from the ground: curves by 3, text by 4.5 (WCAG 2.2, 1.4.11 and 1.4.3)', () => {
    for (const colour of theme.series) expect(contrast(colour, theme.ground), colour).toBeGreaterThanOrEqual(3);
    for (const colour of [theme.ink, theme.faint, theme.accent, theme.good, theme.warning, theme.bad]) {
      expect(contrast(colour, theme.ground), colour).toBeGreaterThanOrEqual(4.5);
      expect(contrast(colour, theme.panel), colour).toBeGreaterThanOrEqual(4.5);
    }
  });

  it('leave letters legible on the grounds that carry them', () => {
    for (const colour of [...theme.parts, theme.sound, theme.above[1]!]) {
      expect(contrast(colour, theme.ink), colour).toBeGreaterThanOrEqual(4.5);
    }
    expect(contrast(theme.bad, theme.ground)).toBeGreaterThanOrEqual(4.5);
  });

  it('grow steadily away from the ground with the size of a residual, on both sides', () => {
    for (const steps of [theme.above, theme.below]) {
      const distances = steps.map((colour) => contrast(colour, theme.ground));
      expect(distances).toEqual([...distances].sort((a, b) => a - b));
    }
  });
});

describe('colour and dash together', () => {
  it('tell as many units apart as there are pairs of them', () => {
    const count = LIGHT.series.length * DASHES.length;
    expect(count).toBeGreaterThanOrEqual(40);
    expect(new Set(Array.from({ length: count }, (_, n) => seriesClass(n))).size).toBe(count);
  });
});
