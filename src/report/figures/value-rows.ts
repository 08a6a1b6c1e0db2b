import { scaleLinear } from 'd3-scale';
import type { Plot } from './figure.ts';
import { element, escaped } from './markup.ts';
import { shortName } from './short-name.ts';

/** A named row of a plot whose values run to the right from 0. */
export interface ValueRow {
  readonly name: string;
  /** At least 0; NaN where there is none. */
  readonly values: readonly number[];
  /** What stands in the row besides, such as why it has no value; mostly empty. */
  readonly remark: string;
}

export interface ValueRowsOptions {
  /** Of the axis, with its unit. */
  readonly title: string;
  /** A bar for each row, or a mark for each of its values. */
  readonly look: 'bars' | 'marks';
  /** The axis ends there; absent where the largest value says so. */
  readonly to?: number;
}

/** Pixels. */
const ROW = 22;
const BAR = 12;
const BELOW = 44;
const TICKS = 5;
/** Characters that fit beside the plot. */
const NAME = 13;

/** Marks tell their uses apart by shape as well as by colour. */
const SHAPES = ['M-4.5 0a4.5 4.5 0 1 0 9 0a4.5 4.5 0 1 0 -9 0z', 'M-4 -4H4V4H-4z', 'M0 -5.5L5 4.5H-5z'] as const;

/** Markup of one of the three marks around the origin. */
export function markShape(use: number): string {
  return element('path', { d: SHAPES[use], class: `use-${use}` });
}

/** A row for each name, as wide as there is room. */
export function valueRows(rows: readonly ValueRow[], { title, look, to }: ValueRowsOptions): Plot {
  const height = ROW * rows.length;
  const values = rows.flatMap((row) => row.values).filter((value) => !Number.isNaN(value));
  const largest = Math.max(0, ...values);
  const scale = scaleLinear().domain([0, to ?? (largest > 0 ? largest : 1)]);
  if (to === undefined) scale.nice(TICKS);
  const end = scale.domain()[1]!;
  const part = (value: number) => `${Number(((100 * value) / end).toFixed(3))}%`;
  const format = scale.tickFormat(TICKS);
  const ticks = scale.ticks(TICKS).map((value) => {
    const line = element('line', { x1: part(value), x2: part(value), y1: 0, y2: height, class: 'grid' });
    return line + element('text', { x: part(value), y: height + 16, class: 'tick middle' }, escaped(format(value)));
  });
  const heading = element('text', { x: '50%', y: height + 36, class: 'axis-title middle' }, escaped(title));
  const body = rows.map(({ name, values: own, remark }, k) => {
    const y = ROW * (k + 0.5);
    const label = element('text', { x: -8, y: y + 4, class: 'end' }, escaped(shortName(name, NAME)));
    const drawn = own.map((value, use) => {
      if (Number.isNaN(value)) return '';
      if (look === 'marks') return element('svg', { x: part(value), y, overflow: 'visible' }, markShape(use));
      return element('rect', { x: 0, y: y - BAR / 2, width: part(value), height: BAR, class: 'use-0' });
    });
    const rest = remark === '' ? '' : element('text', { x: 6, y: y + 4, class: 'small flagged' }, escaped(remark));
    return label + drawn.join('') + rest;
  });
  return {
    kind: 'plot',
    left: 96,
    right: 14,
    top: 6,
    bottom: BELOW,
    height,
    inner: [100, Math.max(1, height)],
    content: '',
    behind: '',
    over: body.join(''),
    range: [0, end],
    axis: ticks.join('') + heading,
  };
}
