import { describe, expect, it } from 'vitest';
import { DEFAULT_TIMES } from '../../src/whatif/costs.ts';
import { namedUnits, PATTERNS, patternDesign } from '../../src/whatif/patterns.ts';
import { predict } from '../../src/whatif/predict.ts';
import { UNIT_VARIANCE } from './designs-made.ts';

const pairs = (units: number, pattern: (typeof PATTERNS)[number]) =>
  patternDesign(namedUnits(units), pattern, { seatings: 1, repeats: 1 }).seatings.map(
    ({ emitter, receiver }) => emitter.slice(1) + receiver.slice(1),
  );

describe('patterns', () => {
  it.each([
    ['all', 4, ['12', '13', '14', '23', '24', '34']],
    ['ring', 4, ['12', '23', '34', '41']],
    ['ring', 2, ['12']],
    ['hub', 4, ['12', '13', '14', '23']],
    ['triangles', 3, ['12', '23', '13']],
    ['triangles', 5, ['12', '23', '13', '34', '45', '35']],
    ['triangles', 4, ['12', '23', '13', '34', '24']],
    ['both-ways', 3, ['12', '21', '13', '31', '23', '32']],
  ] as const)('%s of %d units', (pattern, units, wanted) => {
    expect(pairs(units, pattern)).toEqual(wanted);
  });

  it.each(PATTERNS.filter((pattern) => pattern !== 'ring'))('%s tells three to nine units apart', async (pattern) => {
    for (let units = 3; units <= 9; units++) {
      const design = patternDesign(namedUnits(units), pattern, { seatings: 1, repeats: 1 });
      const { bands } = await predict(design, [UNIT_VARIANCE], { times: DEFAULT_TIMES });
      expect(bands[0]!.units.map(({ status }) => status)).toEqual(Array(units).fill('ok'));
    }
  });

  it('mounts pairs round by round', () => {
    const { seatings } = patternDesign(['A', 'B', 'C'], 'all', { seatings: 2, repeats: 3 });
    expect(seatings.map((s) => s.emitter + s.receiver).join()).toBe('AB,AC,BC,AB,AC,BC');
    expect(seatings.every(({ repeats }) => repeats === 3)).toBe(true);
  });
});
