import { scaleLinear, scaleLog } from 'd3-scale';
import { element } from './markup.ts';

/** Values along the height of a plot, upwards. */
export interface LevelAxis {
  readonly domain: readonly [number, number];
  /** Pixels from the top. */
  readonly y: (value: number) => number;
  /** Grid lines, labels and the axis title. */
  readonly markup: string;
}

export interface LevelAxisOptions {
  readonly height: number;
  /** With its unit. */
  readonly title: string;
  /** The axis then starts there: for what cannot be negative. */
  readonly from?: number;
  /** Values that stand on the axis whatever the data are. */
  readonly includes?: readonly number[];
}

/** Ticks this many pixels apart, roughly. */
const TICK_DISTANCE = 48;

/** An axis that holds all values, with ticks at steps of 1, 2 or 5. */
export function levelAxis(values: Iterable<number>, options: LevelAxisOptions): LevelAxis {
  const { height, title, includes = [] } = options;
  let low = Number.POSITIVE_INFINITY;
  let high = Number.NEGATIVE_INFINITY;
  const include = (value: number) => {
    if (!Number.isFinite(value)) return;
    if (value < low) low = value;
    if (value > high) high = value;
  };
  for (const value of values) include(value);
  for (const value of includes) include(value);
  if (low > high) [low, high] = [0, 1];
  if (options.from !== undefined) low = options.from;
  // A flat curve in the middle of a decibel either way.
  if (high - low < 1e-9) [low, high] = [options.from ?? low - 1, high + 1];
  const count = Math.max(2, Math.round(height / TICK_DISTANCE));
  const scale = scaleLinear().domain([low, high]).range([height, 0]).nice(count);
  if (options.from !== undefined) scale.domain([options.from, scale.domain()[1]!]);
  const format = scale.tickFormat(count);
  const ticks = scale.ticks(count).map((value) => tick(scale(value), format(value), value === 0));
  const [from, to] = scale.domain() as [number, number];
  return { domain: [from, to], y: (value) => scale(value), markup: ticks.join('') + heading(title) };
}

/** A logarithmic axis that holds all values above 0, with ticks at 1, 2 and 5. */
export function ratioAxis(values: Iterable<number>, { height, title }: LevelAxisOptions): LevelAxis {
  let low = Number.POSITIVE_INFINITY;
  let high = 0;
  for (const value of values) {
    if (!(value > 0) || !Number.isFinite(value)) continue;
    if (value < low) low = value;
    if (value > high) high = value;
  }
  if (low > high) [low, high] = [0.1, 1];
  const steps: number[] = [];
  for (let exponent = Math.floor(Math.log10(low)) - 1; exponent <= Math.log10(high) + 1; exponent++) {
    for (const digit of [1, 2, 5]) steps.push(Number(`${digit}e${exponent}`));
  }
  const from = steps.findLast((step) => step <= low * (1 + 1e-9))!;
  const to = steps.find((step) => step >= high * (1 - 1e-9) && step > from)!;
  const scale = scaleLog().domain([from, to]).range([height, 0]);
  const shown = steps.filter((step) => step >= from && step <= to);
  // Where 1, 2 and 5 would stand too close, decades alone do.
  const isCrowded = shown.length * LEAST_DISTANCE > height;
  const ticks = shown
    .filter((step) => !isCrowded || Number.isInteger(Number(Math.log10(step).toFixed(9))))
    .map((step) => tick(scale(step), String(step), false));
  return {
    domain: [from, to],
    y: (value) => (value > 0 ? scale(value) : Number.NaN),
    markup: ticks.join('') + heading(title),
  };
}

/** Pixels between labels one above the other. */
const LEAST_DISTANCE = 14;

function tick(y: number, label: string, isZero: boolean): string {
  return (
    element('line', { x1: '0%', x2: '100%', y1: y, y2: y, class: isZero ? 'grid zero' : 'grid' }) +
    element('text', { x: -8, y: y + 4, class: 'tick end' }, label.replace('-', '\u2212'))
  );
}

function heading(title: string): string {
  return element('text', { x: -48, y: -12, class: 'axis-title' }, title);
}
