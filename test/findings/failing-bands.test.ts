import { describe, expect, it } from 'vitest';
import { failingBands } from '../../src/findings/failing-bands.ts';
import type { HoldFinding } from '../../src/findings/holds.ts';

const TOLERANCE = 1;
const unit = (verdict: HoldFinding['verdict'], partner: number, from = 891): HoldFinding => ({
  unit: 'any',
  mount: '',
  from,
  to: 1.26 * from,
  partner,
  low: 0,
  high: 9,
  pValue: Number.NaN,
  verdict,
});
const times = (count: number, finding: HoldFinding) => Array.from({ length: count }, () => finding);

describe('the additive model fails in a band', () => {
  it('where most units exceed the tolerance, and too many surely so to be chance', () => {
    const holds = [
      ...times(4, unit('not testable', 3)),
      ...times(2, unit('broken', 4)),
      ...times(4, unit('holds', 0.2)),
    ];
    expect(failingBands(holds, TOLERANCE)).toEqual([
      { from: 891, to: 1.26 * 891, units: 10, aboveTolerance: 6, broken: 2 },
    ]);
  });

  it('but not where it is a single unit that depends on its partners', () => {
    expect(failingBands([unit('broken', 5), ...times(9, unit('holds', 0.2))], TOLERANCE)).toEqual([]);
    expect(failingBands([unit('broken', 5), ...times(9, unit('not testable', 1.2))], TOLERANCE)).toEqual([]);
  });

  it('nor where half of the units are within the tolerance, or have no figure', () => {
    const broken = times(5, unit('broken', 4));
    expect(failingBands([...broken, ...times(5, unit('holds', 0.2))], TOLERANCE)).toEqual([]);
    expect(failingBands([...broken, ...times(5, unit('not testable', Number.NaN))], TOLERANCE)).toEqual([]);
  });

  it('band by band, ascending', () => {
    const holds = [2000, 1000, 500].flatMap((from) =>
      times(4, unit(from === 1000 ? 'holds' : 'broken', from === 1000 ? 0.1 : 3, from)),
    );
    expect(failingBands(holds, TOLERANCE).map(({ from }) => from)).toEqual([500, 2000]);
  });
});
