import { scaleLog } from 'd3-scale';
import { frequencyText } from '../../quantity/frequency.ts';
import { element } from './markup.ts';

/** Where a frequency stands along a logarithmic axis: 0 at its start, 1 at its end. */
export type FrequencyScale = (frequency: number) => number;

export function frequencyScale([from, to]: readonly [number, number]): FrequencyScale {
  return scaleLog().domain([from, to]).range([0, 1]);
}

/** The frequencies with half a step around them, so that the first and the last do not stand on the frame; hertz. */
export function frequencyRange(frequencies: ArrayLike<number>): [number, number] {
  const count = frequencies.length;
  const [from, to] = [frequencies[0]!, frequencies[count - 1]!];
  // A single frequency stands in the middle of a third-octave.
  if (count < 2) return [from / 10 ** 0.05, to * 10 ** 0.05];
  return [from / Math.sqrt(frequencies[1]! / from), to * Math.sqrt(to / frequencies[count - 2]!)];
}

export interface FrequencyTick {
  /** Hertz. */
  readonly frequency: number;
  readonly label: string;
  /** 1, 2 or 5 of its decade are labelled where there is room; a power of ten always. */
  readonly rank: 'decade' | 'step' | 'fine';
}

/** Labels of a narrow picture stand at decades only where the axis is longer than this many decades. */
const LONG_AXIS = 1.3;
/** An axis shorter than this many decades has room for ticks between 1, 2 and 5. */
const SHORT_AXIS = 0.7;

/** Ticks at 1, 2 and 5; on an axis that holds fewer than two of these, at every round number in between. */
export function frequencyTicks([from, to]: readonly [number, number]): FrequencyTick[] {
  const decades = Math.log10(to / from);
  const ticks: FrequencyTick[] = [];
  for (let exponent = Math.floor(Math.log10(from)); exponent <= Math.log10(to); exponent++) {
    for (const digit of [1, 2, 5]) {
      const frequency = digit * 10 ** exponent;
      if (frequency < from * (1 - 1e-9) || frequency > to * (1 + 1e-9)) continue;
      const rank = digit === 1 || decades <= LONG_AXIS ? 'decade' : 'step';
      ticks.push({ frequency, label: frequencyText(frequency), rank });
    }
  }
  if (ticks.length >= 2 && decades > SHORT_AXIS) return ticks;
  const scale = scaleLog().domain([from, to]).range([0, 1]);
  const linear = scale.ticks(6).filter((frequency) => frequency >= from && frequency <= to);
  const every = Math.ceil(linear.length / 8);
  return linear.map((frequency, k) => ({
    frequency,
    label: frequencyText(frequency, 6),
    rank: k % (2 * every) === 0 ? 'decade' : k % every === 0 ? 'step' : 'fine',
  }));
}

/** Grid lines and labels of the axis, for a plot of so many pixels of height. */
export function frequencyAxis(range: readonly [number, number], height: number): string {
  const scale = frequencyScale(range);
  return frequencyTicks(range)
    .map(({ frequency, label, rank }) => {
      const x = `${Number((100 * scale(frequency)).toFixed(3))}%`;
      const line = element('line', { x1: x, x2: x, y1: 0, y2: height, class: 'grid' });
      if (rank === 'fine') return line;
      return line + element('text', { x, y: height + 17, class: `tick middle ${rank}` }, label);
    })
    .join('');
}
