import { readFileSync } from 'node:fs';
import { expect, test } from 'vitest';
import { demoSet } from '../../data-demo/generate.ts';

const committed = (name: string) => readFileSync(new URL(`../../data-demo/${name}`, import.meta.url), 'utf8');
const made = demoSet();
const truth = JSON.parse(made.truth) as Truth;
const takes = takesOf(made.pairs);
const frequencies = truth.frequency_hz;
const [exchanged, moved, shifting] = truth.planted as [PlantedTake, PlantedTake, PlantedUnit];
const planted = [exchanged.noted.take, moved.noted.take];
const sound = takes.filter(({ id }) => !planted.includes(id));

/** Beyond so many standard deviations nothing falls by chance: 1 in 16,000 for normal deviations. */
const SIGMAS = 4;

test('made anew, the demo set has the same bytes as the files', () => {
  expect(made.pairs === committed('pairs.csv')).toBe(true);
  expect(made.truth === committed('truth.json')).toBe(true);
});

test('the set stays small: below 2 MB and at most 20,000 rows, a row a take and frequency', () => {
  expect(Buffer.byteLength(made.pairs)).toBeLessThan(2e6);
  const rows = made.pairs.trimEnd().split('\n').length - 1;
  expect(rows).toBeLessThanOrEqual(20_000);
  expect(rows).toBe(takes.length * frequencies.length);
  for (const take of takes) expect(take.frequencies).toEqual(frequencies);
});

test('all 45 pairs were mounted at least twice, some repeated, some taken both ways in one seating', () => {
  const pairs = new Set(takes.map(pairKey));
  expect(pairs.size).toBe(45);
  for (const pair of pairs) {
    const own = takes.filter((take) => pairKey(take) === pair);
    expect(new Set(own.map(({ session }) => session)).size).toBe(2);
    expect(new Set(own.map(seatingKey)).size).toBeGreaterThanOrEqual(2);
  }
  expect(takes.filter(({ repeat }) => repeat === '2').length).toBe(45);
  expect(bothWays().length).toBe(15);
});

test('no seating of a sensor stands in two pairs, so that a seating belongs to one mounting of one pair', () => {
  const partners = new Map<string, Set<string>>();
  for (const take of takes) {
    for (const [own, partner] of [
      [`${take.emitter} ${take.emitterSeating}`, take.receiver],
      [`${take.receiver} ${take.receiverSeating}`, take.emitter],
    ] as const) {
      partners.set(own, (partners.get(own) ?? new Set()).add(partner));
    }
  }
  for (const seen of partners.values()) expect(seen.size).toBe(1);
});

test('the scatter of repeats is the one that truth.json states', () => {
  const differences = takes
    .filter(({ repeat }) => repeat === '2')
    .map((again) => {
      const first = takes.find((take) => sameBut(take, again) && take.repeat === '1')!;
      return again.levels.map((level, f) => level - first.levels[f]!);
    });
  truth.scatter.bands.forEach((band) => {
    const squares = differences.flatMap((own) => own.filter((_, f) => within(band, frequencies[f]!)).map((d) => d * d));
    // White, so n differences tell a standard deviation to 1 / √(2n).
    const tolerance = SIGMAS / Math.sqrt(2 * squares.length);
    expect(Math.abs(Math.sqrt(mean(squares) / 2) / band.repeat_db - 1)).toBeLessThan(tolerance);
  });
});

test('takes of a pair the other way round in the same seating differ by no more than repeats do', () => {
  truth.scatter.bands.forEach((band) => {
    const squares = bothWays().flatMap(([there, back]) =>
      there.levels.map((level, f) => (level - back.levels[f]!) ** 2).filter((_, f) => within(band, frequencies[f]!)),
    );
    const tolerance = SIGMAS / Math.sqrt(2 * squares.length);
    expect(Math.abs(Math.sqrt(mean(squares) / 2) / band.repeat_db - 1)).toBeLessThan(tolerance);
  });
});

test('sound takes stand off the truth by repeat, reseat and partner scatter, as stated for each band', () => {
  const ordinary = sound.filter(({ emitter, receiver }) => emitter !== shifting.unit && receiver !== shifting.unit);
  // Within a band the seatings hardly change along frequency: as many independent deviations as there are mountings.
  const tolerance = SIGMAS / Math.sqrt(2 * new Set(ordinary.map((take) => take.emitter + seatingKey(take))).size);
  truth.scatter.bands.forEach((band) => {
    const seen = rms(ordinary.flatMap((take) => misfit(take).filter((_, f) => within(band, frequencies[f]!))));
    const stated = Math.hypot(
      band.repeat_db,
      Math.SQRT2 * band.reseat_one_unit_db,
      Math.SQRT2 * band.partner_one_unit_db,
    );
    expect(Math.abs(seen / stated - 1)).toBeLessThan(tolerance);
  });
});

test('one take stands 3 dB too high, and it is the one that truth.json names', () => {
  const outside = (f: number) => !within(shifting, frequencies[f]!);
  const offsets = takes
    .filter(({ id }) => id !== exchanged.noted.take)
    .map((take) => ({ id: take.id, offset: mean(misfit(take).filter((_, f) => outside(f))) }));
  const reseat = Math.SQRT2 * rms(truth.scatter.bands.map((band) => band.reseat_one_unit_db));
  for (const { id, offset } of offsets) {
    const expected = id === moved.noted.take ? moved.gain_db! : 0;
    // A seating moves the mean over frequency by less than it moves a single frequency.
    expect(Math.abs(offset - expected)).toBeLessThan(SIGMAS * reseat);
  }
  expect(moved.gain_db).toBe(3);
  expect(find(moved)).toMatchObject({ ...noted(moved), line: moved.noted.first_line });
});

test('one take labelled N03>N08 is N04>N08, and fits under no other pair of names', () => {
  const take = find(exchanged);
  expect(take).toMatchObject({ ...noted(exchanged), line: exchanged.noted.first_line });
  expect([take.emitter, take.receiver]).toEqual(['N03', 'N08']);
  expect(exchanged.really).toEqual({ emitter: 'N04', receiver: 'N08' });
  const units = Object.keys(truth.level_db);
  const others = units.flatMap((emitter) =>
    units.filter((receiver) => receiver > emitter).map((receiver) => ({ emitter, receiver })),
  );
  const ranked = others
    .map((names) => ({ ...names, misfit: rms(misfit({ ...take, ...names })) }))
    .sort((a, b) => a.misfit - b.misfit);
  expect(ranked[0]).toMatchObject({ emitter: 'N04', receiver: 'N08' });
  expect(ranked[1]!.misfit).toBeGreaterThan(2 * ranked[0]!.misfit);
});

test('only the shifting unit depends on its partner by more than 1 dB, and only in the band that truth.json names', () => {
  const units = Object.keys(truth.level_db);
  for (const unit of units) {
    for (const band of truth.scatter.bands) {
      const scatter = partnerScatterSeen(unit, band);
      const inBand = unit === shifting.unit && within(shifting, Math.sqrt(band.band_from_hz * band.band_to_hz));
      if (inBand) expect(scatter).toBeGreaterThan(1);
      // What another unit sees of the shifting one is in its own pair with it; that pair is left out.
      else expect(scatter).toBeLessThan(1);
    }
  }
  expect(shifting.unit).toBe('N07');
});

interface Band {
  readonly band_from_hz: number;
  readonly band_to_hz: number;
}

interface PlantedTake {
  readonly noted: {
    readonly take: string;
    readonly first_line: number;
    readonly emitter: string;
    readonly receiver: string;
    readonly session: string;
  };
  readonly really?: { readonly emitter: string; readonly receiver: string };
  readonly gain_db?: number;
}

interface PlantedUnit extends Band {
  readonly unit: string;
}

interface Truth {
  readonly planted: readonly unknown[];
  readonly scatter: {
    readonly bands: readonly (Band & {
      readonly repeat_db: number;
      readonly reseat_one_unit_db: number;
      readonly partner_one_unit_db: number;
    })[];
  };
  readonly frequency_hz: number[];
  readonly level_db: Readonly<Record<string, readonly number[]>>;
}

interface DemoTake {
  readonly id: string;
  readonly line: number;
  readonly emitter: string;
  readonly receiver: string;
  readonly session: string;
  readonly emitterSeating: string;
  readonly receiverSeating: string;
  readonly repeat: string;
  readonly frequencies: number[];
  readonly levels: number[];
}

function takesOf(csv: string): DemoTake[] {
  const found = new Map<string, DemoTake>();
  const lines = csv.trimEnd().split('\n').slice(1);
  lines.forEach((row, i) => {
    const cells = row.split(',') as [string, string, string, string, string, string, string, string];
    const [emitter, receiver, session, emitterSeating, receiverSeating, repeat] = cells;
    const key = cells.slice(0, 6).join();
    const take = found.get(key) ?? {
      id: `T${String(found.size + 1).padStart(3, '0')}`,
      line: i + 2,
      emitter,
      receiver,
      session,
      emitterSeating,
      receiverSeating,
      repeat,
      frequencies: [],
      levels: [],
    };
    take.frequencies.push(Number(cells[6]));
    take.levels.push(Number(cells[7]));
    found.set(key, take);
  });
  return [...found.values()];
}

function misfit(take: DemoTake): number[] {
  const { [take.emitter]: emitter, [take.receiver]: receiver } = truth.level_db;
  return take.levels.map((level, f) => level - emitter![f]! - receiver![f]!);
}

// Standard deviation over the partners of a unit, root mean square over the frequencies of a band.
function partnerScatterSeen(unit: string, band: Band): number {
  const partners = Object.keys(truth.level_db).filter((name) => name !== unit && name !== shifting.unit);
  const misfits = partners.map((partner) =>
    sound.filter((take) => pairKey(take) === [unit, partner].sort().join()).map(misfit),
  );
  const columns = frequencies.flatMap((frequency, f) => (within(band, frequency) ? [f] : []));
  return rms(
    columns.map((f) => {
      const means = misfits.map((own) => mean(own.map((levels) => levels[f]!)));
      const centre = mean(means);
      return Math.sqrt(means.reduce((sum, value) => sum + (value - centre) ** 2, 0) / (means.length - 1));
    }),
  );
}

function bothWays(): [DemoTake, DemoTake][] {
  return takes.flatMap((there): [DemoTake, DemoTake][] => {
    const back = takes.find(
      (take) =>
        take.emitter === there.receiver &&
        take.receiver === there.emitter &&
        take.emitterSeating === there.receiverSeating &&
        take.receiverSeating === there.emitterSeating &&
        there.emitter < there.receiver &&
        there.repeat === '1',
    );
    return back === undefined ? [] : [[there, back]];
  });
}

function sameBut(a: DemoTake, b: DemoTake): boolean {
  return a.emitter === b.emitter && a.receiver === b.receiver && seatingKey(a) === seatingKey(b);
}

function pairKey({ emitter, receiver }: DemoTake): string {
  return [emitter, receiver].sort().join();
}

function seatingKey(take: DemoTake): string {
  const ends = [`${take.emitter} ${take.emitterSeating}`, `${take.receiver} ${take.receiverSeating}`];
  return `${take.session} ${ends.sort().join()}`;
}

function find(fault: PlantedTake): DemoTake {
  return takes.find(({ id }) => id === fault.noted.take)!;
}

function noted({ noted: { emitter, receiver, session } }: PlantedTake) {
  return { emitter, receiver, session };
}

function within(band: Band, frequency: number): boolean {
  return frequency >= band.band_from_hz && frequency < band.band_to_hz;
}

function mean(values: readonly number[]): number {
  return values.reduce((sum, value) => sum + value, 0) / values.length;
}

function rms(values: readonly number[]): number {
  return Math.sqrt(mean(values.map((value) => value * value)));
}
