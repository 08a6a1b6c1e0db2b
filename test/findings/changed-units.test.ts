import { describe, expect, it } from 'vitest';
import { changedUnits } from '../../src/findings/changed-units.ts';
import { settle } from '../../src/findings/settle.ts';
import { buildModel } from '../../src/model/build-model.ts';
import { DEFAULT_MODEL_OPTIONS } from '../../src/model/model-options.ts';
import type { TakeSet } from '../../src/takes/take-set.ts';
import { logSpaced, simulatePairs } from '../simulation/pair-set.ts';

const SETS = 12;
const RISK = 0.05;
const bench = (seed: number, db: number, fromTake = 60) =>
  simulatePairs({
    seed,
    units: 8,
    seatings: 2,
    repeats: 2,
    frequencies: logSpaced(40, 10_000, 320_000),
    repeatScatter: 0.15,
    reseatScatter: 0.2,
    faults: db === 0 ? [] : [{ kind: 'drifted unit', unit: 2, fromTake, db }],
  }).set;

async function changesOf(set: TakeSet) {
  const model = buildModel(set, { ...DEFAULT_MODEL_OPTIONS, model: 'reciprocal' });
  const { screening } = await settle(set, model, { risk: RISK });
  return changedUnits(set, model, screening.levels, RISK);
}

describe('a unit that is another one from some take on', () => {
  it('is found in nine of ten sets, with its size, and no other unit is', async () => {
    let found = 0;
    let within = 0;
    let others = 0;
    for (let seed = 1; seed <= SETS; seed++) {
      const changes = await changesOf(bench(seed, 0.5));
      const own = changes.find(({ unit }) => unit === 'U03');
      found += Number(own !== undefined);
      within += Number(own !== undefined && Math.abs(own.shift - 0.5) < 3 * own.uncertainty);
      others += changes.filter(({ unit }) => unit !== 'U03').length;
    }
    expect(found).toBeGreaterThanOrEqual(0.9 * SETS);
    expect(within).toBeGreaterThanOrEqual(0.9 * SETS);
    expect(others).toBeLessThanOrEqual(1);
  });

  it('is not seen where nothing changed', async () => {
    let seen = 0;
    for (let seed = 101; seed <= 100 + SETS; seed++) seen += (await changesOf(bench(seed, 0))).length;
    // At a risk of 5 % a set, three or more of twelve come once in fifty times.
    expect(seen).toBeLessThanOrEqual(2);
  });

  it('is placed by the time of the takes where every take has one, whatever the order in the file', async () => {
    const set = bench(5, 1);
    const start = Date.UTC(2026, 4, 4, 8);
    const timed = set.takes.map((take, t) => ({ ...take, takenAt: new Date(start + 60_000 * t).toISOString() }));
    const [inOrder] = await changesOf({ ...set, takes: timed });
    const width = set.frequencies.length;
    const reversed = [...timed.keys()].reverse();
    const levels = Float64Array.from(reversed.flatMap((t) => [...set.levels.subarray(t * width, (t + 1) * width)]));
    const [backwards] = await changesOf({ ...set, takes: reversed.map((t) => timed[t]!), levels });
    expect(inOrder).toMatchObject({ unit: 'U03', order: 'time' });
    expect(backwards).toMatchObject({ unit: 'U03', order: 'time', before: inOrder!.before, after: inOrder!.after });
    expect(timed[reversed[backwards!.from]!]!.takenAt).toBe(timed[inOrder!.from]!.takenAt);
  });
});
