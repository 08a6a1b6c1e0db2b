import { writeFileSync } from 'node:fs';
import { pathToFileURL } from 'node:url';
import { randomStream } from '../src/numeric/random.ts';
import { type PlannedTake, schedule } from './schedule.ts';
import { ownLevel, type Seating, type Sensor, seat, sensors } from './sensors.ts';
import { type ExchangedLabel, type MovedGain, type NotedTake, truthRecord } from './truth.ts';

/** The demo set as the contents of its files. */
export interface DemoSet {
  /** The takes in the long layout. */
  readonly pairs: string;
  /** What they were made from. */
  readonly truth: string;
}

const SEED = 20_671;
const FREQUENCY_COUNT = 120;
const LOWEST = 10_000;
const HIGHEST = 400_000;
/** Standard deviation of a repeated reading in dB, at the lowest and at the highest frequency. */
const REPEAT_SCATTER = { low: 0.1, high: 0.15 };

const MOVED_GAIN: MovedGain = {
  kind: 'moved gain',
  noted: { emitter: 'N06', receiver: 'N09', session: 'afternoon' },
  gain_db: 3,
};
const EXCHANGED_LABEL: ExchangedLabel = {
  kind: 'exchanged label',
  noted: { emitter: 'N03', receiver: 'N08', session: 'morning' },
  really: { emitter: 'N04', receiver: 'N08' },
};

/** Makes the demo set; the same bytes every time. */
export function demoSet(): DemoSet {
  const frequencies = demoFrequencies();
  const units = sensors(SEED);
  const unit = (name: string) => units.find((candidate) => candidate.name === name)!;
  const takes = schedule(units.map(({ name }) => name));
  const seatings = drawSeatings(units, takes);
  const noise = randomStream(SEED, 1);
  const rows = ['emitter,receiver,session,emitter_seating,receiver_seating,repeat,frequency_hz,level_db'];
  for (const take of takes) {
    // The note says one sensor, the bench held another, in a seating of its own that nobody counted.
    const exchanged = isPlanted(take, EXCHANGED_LABEL);
    const emitter = unit(exchanged ? EXCHANGED_LABEL.really.emitter : take.emitter);
    const receiver = unit(take.receiver);
    const gain = isPlanted(take, MOVED_GAIN) ? MOVED_GAIN.gain_db : 0;
    const emitterSeating = seatings.get(emitter.name)!.at(exchanged ? -1 : take.emitterSeating - 1)!;
    const receiverSeating = seatings.get(receiver.name)![take.receiverSeating - 1]!;
    for (const frequency of frequencies) {
      const level =
        ownLevel(emitter, frequency, receiver, emitterSeating) +
        ownLevel(receiver, frequency, emitter, receiverSeating) +
        2 * sharedHalf(frequency) +
        gain +
        repeatScatter(frequency) * noise.normal();
      rows.push(
        `${take.emitter},${take.receiver},${take.session},${take.emitterSeating},${take.receiverSeating},${take.repeat},${frequency},${level.toFixed(2)}`,
      );
    }
  }
  const truth = truthRecord({
    frequencies,
    units,
    takes,
    seatings,
    sharedHalf,
    repeatScatter,
    exchanged: EXCHANGED_LABEL,
    moved: MOVED_GAIN,
  });
  return { pairs: `${rows.join('\n')}\n`, truth: `${JSON.stringify(truth, undefined, 1)}\n` };
}

/** Log-spaced and rounded to three digits, in hertz. */
function demoFrequencies(): number[] {
  return Array.from({ length: FREQUENCY_COUNT }, (_, k) =>
    Number((LOWEST * (HIGHEST / LOWEST) ** (k / (FREQUENCY_COUNT - 1))).toPrecision(3)),
  );
}

// Half of the block's loss and half of the reciprocity parameter, in dB: they cannot be told from the sensors.
function sharedHalf(frequency: number): number {
  const block = -22 - 6 * (frequency / HIGHEST) + 0.8 * Math.sin(3 * Math.log2(frequency / LOWEST));
  const reciprocity = -40 - 20 * Math.log10(frequency / 100_000);
  return (block + reciprocity) / 2;
}

function repeatScatter(frequency: number): number {
  const along = Math.log(frequency / LOWEST) / Math.log(HIGHEST / LOWEST);
  return REPEAT_SCATTER.low + (REPEAT_SCATTER.high - REPEAT_SCATTER.low) * along;
}

function isPlanted(take: PlannedTake, { noted }: { noted: NotedTake }): boolean {
  return take.emitter === noted.emitter && take.receiver === noted.receiver && take.session === noted.session;
}

/** The seatings of each sensor in the order it was mounted, and one that nobody counted; each sensor has a stream of its own. */
function drawSeatings(units: readonly Sensor[], takes: readonly PlannedTake[]): Map<string, Seating[]> {
  const drawn = units.map((sensor, i): [string, Seating[]] => {
    const count = takes.reduce((most, take) => {
      const own =
        take.emitter === sensor.name ? take.emitterSeating : take.receiver === sensor.name ? take.receiverSeating : 0;
      return Math.max(most, own);
    }, 0);
    const stream = randomStream(SEED, 2 + i);
    return [sensor.name, Array.from({ length: count + 1 }, () => seat(sensor, stream))];
  });
  return new Map(drawn);
}

function writeDemoSet(): void {
  const { pairs, truth } = demoSet();
  writeFileSync(new URL('pairs.csv', import.meta.url), pairs);
  writeFileSync(new URL('truth.json', import.meta.url), truth);
}

if (process.argv[1] !== undefined && import.meta.url === pathToFileURL(process.argv[1]).href) writeDemoSet();
