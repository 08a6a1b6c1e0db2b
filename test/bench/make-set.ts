import { createWriteStream } from 'node:fs';
import { Readable } from 'node:stream';
import { pipeline } from 'node:stream/promises';
import { randomStream } from '../../src/numeric/random.ts';

/** How large a set to make. */
export interface BenchSize {
  /** Number of frequencies in thousands; 1 gives 1,560,000 readings. */
  readonly scale: number;
  /** 40 unless given. */
  readonly units?: number;
}

/** What a written set holds. */
export interface BenchSet {
  readonly takes: number;
  readonly frequencies: number;
  readonly readings: number;
}

const SEED = 1;
const SEATINGS = 2;
const FREQUENCIES_PER_SCALE = 1000;
const LOWEST = 20_000;
const HIGHEST = 2_000_000;
/** Standard deviation of a seating's level and of its slope over the whole range, one unit, in dB. */
const SEATING_LEVEL = 0.15;
const SEATING_SLOPE = 0.1;
/** Each reading has its own standard uncertainty, evenly between these, in dB: no two frequencies share their weights. */
const UNCERTAINTY = { least: 0.05, most: 0.15 };

/**
 * Writes a set of all pairs of the units, each mounted twice, in the long layout. The same size gives the same bytes.
 * It is written as a stream, a take at a time.
 */
export async function writeBenchSet(path: string, { scale, units = 40 }: BenchSize): Promise<BenchSet> {
  const frequencies = Math.round(FREQUENCIES_PER_SCALE * scale);
  await pipeline(Readable.from(rowsOf(units, frequencies)), createWriteStream(path));
  const takes = (SEATINGS * units * (units - 1)) / 2;
  return { takes, frequencies, readings: takes * frequencies };
}

/** The file's text: the header, then a take a piece. */
function* rowsOf(units: number, count: number): Generator<string> {
  const stream = randomStream(SEED);
  const along = Array.from({ length: count }, (_, f) => f / count);
  const frequencyText = along.map((part) => (LOWEST * (HIGHEST / LOWEST) ** part).toFixed(1));
  const responses = Array.from({ length: units }, () => {
    const [level, swing, phase, turns] = [stream.normal(), stream.normal(), stream.uniform(), 2 + 4 * stream.uniform()];
    return along.map((part) => -30 + 3 * level + 4 * swing * Math.sin(2 * Math.PI * (turns * part + phase)));
  });
  const mountings = new Array<number>(units).fill(0);
  yield 'emitter,receiver,emitter_seating,receiver_seating,frequency_hz,level_db,u_db\n';
  for (let seating = 0; seating < SEATINGS; seating++) {
    for (let i = 0; i < units; i++) {
      for (let j = i + 1; j < units; j++) {
        mountings[i] = mountings[i]! + 1;
        mountings[j] = mountings[j]! + 1;
        const start = `${unitName(i)},${unitName(j)},${mountings[i]},${mountings[j]},`;
        // Both units' seatings together: twice the variance of one.
        const level = Math.SQRT2 * SEATING_LEVEL * stream.normal();
        const slope = Math.SQRT2 * SEATING_SLOPE * stream.normal();
        let text = '';
        for (let f = 0; f < count; f++) {
          const u = Number((UNCERTAINTY.least + (UNCERTAINTY.most - UNCERTAINTY.least) * stream.uniform()).toFixed(4));
          const seated = level + slope * (2 * along[f]! - 1);
          const value = responses[i]![f]! + responses[j]![f]! + seated + u * stream.normal();
          text += `${start}${frequencyText[f]},${value.toFixed(4)},${u}\n`;
        }
        yield text;
      }
    }
  }
}

function unitName(index: number): string {
  return `S${String(index + 1).padStart(2, '0')}`;
}
