import { describe, expect, it } from 'vitest';
import { examine } from '../../src/findings/examine.ts';
import { settle } from '../../src/findings/settle.ts';
import { buildModel } from '../../src/model/build-model.ts';
import { DEFAULT_MODEL_OPTIONS } from '../../src/model/model-options.ts';
import { randomStream } from '../../src/numeric/random.ts';
import type { TakeSet } from '../../src/takes/take-set.ts';
import { DEFAULT_TIMES } from '../../src/whatif/costs.ts';
import type { Design } from '../../src/whatif/design.ts';
import { designOfRun, lastSeatings } from '../../src/whatif/design-of-run.ts';
import { type NextOptions, nextTakes } from '../../src/whatif/next-takes.ts';
import { namedUnits, patternDesign } from '../../src/whatif/patterns.ts';
import { plannedBench } from '../../src/whatif/planned-bench.ts';
import { simulateDesign } from '../../src/whatif/simulate-design.ts';
import { designOf, ladder } from './designs-made.ts';

const BAND = ladder(0.1, 0.3, 0.2);
const FREQUENCIES = Array.from({ length: 12 }, (_, k) => 9000 * 1.018 ** k);

async function planAfter(set: TakeSet, options: Partial<NextOptions> = {}) {
  const model = buildModel(set, { ...DEFAULT_MODEL_OPTIONS, model: 'reciprocal' });
  const settled = await settle(set, model, { risk: 0.05 });
  const examination = examine(set, model, settled, { coverage: 0.95, risk: 0.05, tolerance: 1 });
  const plan = await nextTakes(designOfRun('run', set, settled.leftOut), set, examination, [BAND], {
    model: { ...DEFAULT_MODEL_OPTIONS, model: 'reciprocal' },
    times: DEFAULT_TIMES,
    coverage: 0.95,
    target: undefined,
    most: 20,
    seed: 1,
    ...options,
  });
  return { plan, settled };
}

function runOf(design: Design): TakeSet {
  const bench = plannedBench(design, DEFAULT_MODEL_OPTIONS, FREQUENCIES);
  const { set } = simulateDesign(
    bench,
    FREQUENCIES.map(() => BAND),
    randomStream(3),
  );
  return set;
}

const names = (plan: Awaited<ReturnType<typeof planAfter>>['plan']) =>
  plan.takes.map(
    ({ purpose, seatings }) => `${purpose} ${seatings.map((s) => `${s.emitter}>${s.receiver}`).join('+')}`,
  );

describe('nextTakes', () => {
  it('closes what is open first, and says how many units gain a level', async () => {
    const { plan } = await planAfter(runOf(designOf('A>B r2', 'B>C r2', 'C>D r2', 'D>A r2')));
    expect(plan.mean).toBeNaN();
    expect(plan.takes[0]).toMatchObject({ purpose: 'close', closes: 4 });
    expect(plan.takes[0]!.mean).toBeGreaterThan(0);
  });

  it('takes a flagged take again, and has it back in the figures', async () => {
    const set = runOf(patternDesign(namedUnits(6), 'all', { seatings: 2, repeats: 2 }));
    const levels = set.levels.map((level, cell) => (Math.floor(cell / 12) === 5 ? level + 4 : level));
    const { plan, settled } = await planAfter({ ...set, levels });
    expect([...settled.leftOut]).toEqual([5]);
    const { emitter, receiver } = set.takes[5]!;
    expect(names(plan)).toEqual([`redo ${emitter}>${receiver}`]);
    expect(plan.takes[0]!.mean).toBeLessThan(plan.mean);
  });

  it('checks what nothing checks, and not twice what one take checks', async () => {
    const { plan } = await planAfter(
      runOf(designOf('A>B x2', 'A>C x2', 'B>C x2', 'A>D x2', 'B>D x2', 'C>D x2', 'D>E', 'E>F', 'C>F x2')),
    );
    const checks = plan.takes.filter(({ purpose }) => purpose === 'check');
    expect(checks.length).toBeLessThanOrEqual(1);
    for (const { checks: count } of checks) expect(count).toBeGreaterThan(0);
  });

  it('reaches a target with the fewest takes, or says what no number of takes can get below', async () => {
    const set = runOf(patternDesign(namedUnits(5), 'ring', { seatings: 2, repeats: 2 }));
    const { plan } = await planAfter(set, { target: 0.4 });
    expect(plan.target!.isReached).toBe(true);
    expect(plan.target!.reached).toBeLessThanOrEqual(0.4);
    const worst = plan.takes.map(({ worst: u }) => 1.96 * u);
    // The takes before the last one leave the target unreached.
    expect(worst.at(-2) ?? 1.96 * plan.worst).toBeGreaterThan(0.4);
    const beyond = (await planAfter(set, { target: 0.05 })).plan.target!;
    expect(beyond.isReached).toBe(false);
    expect(beyond.limit).toBeGreaterThan(0.05);
  });
});

describe('a run as a design', () => {
  it('keeps the seatings of the run, without the takes left out, and knows how far units were counted', () => {
    const set = runOf(designOf('A>B r2', 'B>C', 'A>C'));
    const labelled = {
      ...set,
      takes: set.takes.map((take, t) => ({ ...take, emitterSeating: String(t + 3), receiverSeating: '' })),
    };
    expect(designOfRun('run', set, new Set([0])).seatings.map(({ repeats, kind }) => `${kind} ${repeats}`)).toEqual([
      'made 1',
      'made 1',
      'made 1',
    ]);
    expect(lastSeatings(labelled)).toEqual(
      new Map([
        ['A', 6],
        ['B', 5],
      ]),
    );
  });
});
