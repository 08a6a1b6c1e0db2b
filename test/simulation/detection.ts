import { examine } from '../../src/findings/examine.ts';
import { type Settled, settle } from '../../src/findings/settle.ts';
import { buildModel } from '../../src/model/build-model.ts';
import { DEFAULT_MODEL_OPTIONS } from '../../src/model/model-options.ts';
import { type RandomStream, randomStream } from '../../src/numeric/random.ts';
import { coverageFactor } from '../../src/numeric/student-t.ts';
import { logSpaced, simulatePairs } from './pair-set.ts';
import type { PlantedFault } from './planted-faults.ts';

/** The bench of all detection figures: 8 units, all pairs, 2 seatings, 2 repeats, 150 frequencies, resonances that wander. */
const BENCH = {
  units: 8,
  seatings: 2,
  repeats: 2,
  frequencies: logSpaced(150, 10_000, 320_000),
  repeatScatter: 0.15,
  centreWander: 0.01,
  qualityWander: 0.01,
} as const;

const PAIRS = Array.from({ length: 8 }, (_, i) => i).flatMap((i) =>
  Array.from({ length: 7 - i }, (_, k): readonly [number, number] => [i, i + 1 + k]),
);
const TAKES = PAIRS.length * BENCH.seatings * BENCH.repeats;
const RISK = 0.05;
const LOWEST = BENCH.frequencies[0]!;

/** Counts of what was seen over some sets. */
export interface Detection {
  readonly sets: number;
  /** Sets (or planted faults) in which each thing was so. */
  readonly counts: Readonly<Record<string, number>>;
}

type Tally = Record<string, number>;

function add(tally: Tally, key: string, happened: boolean | number): void {
  tally[key] = (tally[key] ?? 0) + Number(happened);
}

async function overSets(
  sets: number,
  kind: number,
  see: (stream: RandomStream, seed: number, tally: Tally) => Promise<void>,
): Promise<Detection> {
  const counts: Tally = {};
  for (let set = 0; set < sets; set++) {
    const seed = 10_000 * kind + set;
    await see(randomStream(seed, 77), seed, counts);
  }
  return { sets, counts };
}

async function settled(seed: number, faults: readonly PlantedFault[]) {
  const { set } = simulatePairs({ ...BENCH, seed, faults });
  const model = buildModel(set, { ...DEFAULT_MODEL_OPTIONS, model: 'reciprocal' });
  return { set, model, found: await settle(set, model, { risk: RISK }) };
}

const isSuspect = ({ screening }: Settled, take: number) =>
  ['flagged', 'tied'].includes(screening.takes[take]!.verdict);

const bestOf = ({ explained }: Settled, take: number) =>
  explained.find((one) => one.take === take)?.ranked[0]?.explanation;

/** Sets in which nothing is wrong. */
export const cleanSets = (sets: number) =>
  overSets(sets, 1, async (_, seed, tally) => {
    const { found } = await settled(seed, []);
    add(tally, 'any flag', found.explained.length > 0);
  });

export const movedGains = (sets: number) =>
  overSets(sets, 2, async (stream, seed, tally) => {
    const take = anyTake(stream);
    const db = stream.uniform() < 0.5 ? 1 : -1;
    const { found } = await settled(seed, [{ kind: 'moved gain', take, db }]);
    const best = bestOf(found, take);
    add(tally, 'flagged', isSuspect(found, take));
    add(tally, 'named', best?.kind === 'moved gain');
    const { shift, shiftUncertainty, shiftDof } = found.screening.takes[take]!;
    add(tally, 'within U', Math.abs(shift - db) <= coverageFactor(0.95, shiftDof) * shiftUncertainty);
    add(
      tally,
      'others flagged',
      found.explained.some((one) => one.take !== take),
    );
  });

export const exchangedLabels = (sets: number) =>
  overSets(sets, 3, async (stream, seed, tally) => {
    const fault = anyLabel(stream);
    const { found } = await settled(seed, [fault]);
    const best = bestOf(found, fault.take);
    add(tally, 'flagged', isSuspect(found, fault.take));
    add(tally, 'named', isLabel(best, fault));
  });

export const localDips = (sets: number) =>
  overSets(sets, 4, async (stream, seed, tally) => {
    const fault = anyDip(stream);
    const { found } = await settled(seed, [fault]);
    add(tally, 'flagged', isSuspect(found, fault.take));
    add(tally, 'named', bestOf(found, fault.take)?.kind === 'local');
  });

/** Four faults of different kinds, in four takes of one set. */
export const fourFaults = (sets: number) =>
  overSets(sets, 5, async (stream, seed, tally) => {
    const takes = differentTakes(stream, 4);
    const faults: (PlantedFault & { readonly take: number })[] = [
      { kind: 'moved gain', take: takes[0]!, db: 1 },
      { ...anyLabel(stream, takes[1]!) },
      { ...anyDip(stream), take: takes[2]! },
      { kind: 'slope', take: takes[3]!, dbPerOctave: 0.5 },
    ];
    const { found } = await settled(seed, faults);
    for (const { take } of faults) add(tally, 'found', isSuspect(found, take) ? 0.25 : 0);
    add(
      tally,
      'others flagged',
      found.explained.some((one) => !takes.includes(one.take)),
    );
  });

/** A unit whose resonance shifts with its partner by 3 % inside one octave. */
export const shiftingResonances = (sets: number) =>
  overSets(sets, 6, async (stream, seed, tally) => {
    const unit = Math.floor(8 * stream.uniform());
    const centre = LOWEST * 2 ** (0.8 + 3.4 * stream.uniform());
    const [from, to] = [centre / Math.SQRT2, centre * Math.SQRT2];
    const { set, model, found } = await settled(seed, [{ kind: 'shifting resonance', unit, from, to, percent: 3 }]);
    const { holds } = examine(set, model, found, { coverage: 0.95, tolerance: 1, risk: RISK });
    const name = `U${String(unit + 1).padStart(2, '0')}`;
    const isInside = (hold: (typeof holds)[number]) => hold.to > 1.001 * from && hold.from < 0.999 * to;
    const accused = holds.filter(({ verdict }) => verdict === 'strained' || verdict === 'broken');
    const inside = holds.filter(isInside);
    add(
      tally,
      'reported',
      accused.some((hold) => hold.unit === name && isInside(hold)),
    );
    const others = inside.filter((hold) => hold.unit !== name);
    add(tally, 'other units accused', accused.filter((hold) => others.includes(hold)).length / others.length);
    const elsewhere = holds.filter((hold) => !isInside(hold));
    add(tally, 'other bands accused', accused.filter((hold) => elsewhere.includes(hold)).length / elsewhere.length);
    add(tally, 'any take flagged', found.explained.length > 0);
  });

function anyTake(stream: RandomStream): number {
  return Math.floor(TAKES * stream.uniform());
}

function differentTakes(stream: RandomStream, count: number): number[] {
  const takes = new Set<number>();
  while (takes.size < count) takes.add(anyTake(stream));
  return [...takes];
}

type Label = Extract<PlantedFault, { kind: 'exchanged label' }>;

function anyLabel(stream: RandomStream, take = anyTake(stream)): Label {
  const pair = PAIRS[Math.floor(take / BENCH.repeats) % PAIRS.length]!;
  let unit = Math.floor(8 * stream.uniform());
  while (pair.includes(unit)) unit = (unit + 1) % 8;
  return { kind: 'exchanged label', take, end: stream.uniform() < 0.5 ? 'emitter' : 'receiver', unit };
}

function isLabel(best: ReturnType<typeof bestOf>, { end, unit }: Label): boolean {
  const name = `U${String(unit + 1).padStart(2, '0')}`;
  return best?.kind === 'another label' && best.end === end && best.unit === name;
}

/** 2 dB over a third of an octave. */
function anyDip(stream: RandomStream): Extract<PlantedFault, { kind: 'local bump' }> {
  const centre = LOWEST * 2 ** (0.5 + 4 * stream.uniform());
  return { kind: 'local bump', take: anyTake(stream), from: centre / 2 ** (1 / 6), to: centre * 2 ** (1 / 6), db: -2 };
}
