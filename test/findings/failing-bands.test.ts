import { describe, expect, it } from 'vitest';
import { failingBands } from '../../src/findings/failing-bands.ts';
import { settle } from '../../src/findings/settle.ts';
import { buildModel } from '../../src/model/build-model.ts';
import { DEFAULT_MODEL_OPTIONS } from '../../src/model/model-options.ts';
import { logSpaced, simulatePairs } from '../simulation/pair-set.ts';
import type { SimulationOptions } from '../simulation/simulation-options.ts';

const OPTIONS = { tolerance: 1, coverage: 0.95 };
/** Two third-octave bands. */
const FREQUENCIES = logSpaced(8, 900, 1400);

async function failing(more: Partial<SimulationOptions>, seed: number) {
  const { set } = simulatePairs({ units: 9, frequencies: FREQUENCIES, repeatScatter: 0.1, ...more, seed });
  const model = buildModel(set, { ...DEFAULT_MODEL_OPTIONS, model: 'reciprocal' });
  const { screening } = await settle(set, model, { risk: 0.05 });
  return failingBands(screening.levels, OPTIONS);
}

describe('the additive model fails in a band', () => {
  it('where chains depend on their pair by far more than the tolerance, even with each pair taken once', async () => {
    for (let seed = 1; seed <= 10; seed++) {
      const bands = await failing({ partnerScatter: 6, correlation: 0 }, seed);
      expect(bands.length).toBeGreaterThanOrEqual(1);
      // Half of 6 dB squared for each end; a bound that is a bound.
      for (const { typical, low } of bands) {
        expect(typical).toBeGreaterThan(2);
        expect(low).toBeLessThan(typical);
      }
    }
  });

  it('but not where the scatter is within the tolerance', async () => {
    for (let seed = 1; seed <= 10; seed++) expect(await failing({ partnerScatter: 1.2 }, seed)).toEqual([]);
  });

  it('nor where it is a single unit that depends on its partners', async () => {
    const fault = { kind: 'shifting resonance', unit: 4, from: 900, to: 1800, percent: 12 } as const;
    for (let seed = 1; seed <= 10; seed++) expect(await failing({ faults: [fault] }, seed)).toEqual([]);
  });
});
