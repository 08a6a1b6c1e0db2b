import type { LoopBand, LoopFinding } from '../../findings/loops.ts';
import { coverageFactors } from '../../numeric/student-t.ts';
import { figureTexts } from '../figure-wording.ts';
import { loopText } from '../loops-table.ts';
import { frequencyCell } from '../number-text.ts';
import type { Result } from '../result.ts';
import type { Figure, LegendEntry } from './figure.ts';
import { frequencyAxis, frequencyScale } from './frequency-axis.ts';
import { levelAxis } from './level-axis.ts';
import { element } from './markup.ts';
import { figureText, roundedCell } from './numbers.ts';
import { INNER_WIDTH } from './responses-figure.ts';

const HEIGHT = 280;

/** A loop in a band, with its place in the list of loops. */
interface Dot {
  readonly loop: number;
  readonly band: LoopBand;
  /** closure / (k u): within −1 to 1 the loop closes. */
  readonly part: number;
}

/** Closures over frequency, as parts of what their uncertainty allows; absent where no loop has an uncertainty. */
export function loopsFigure(result: Result): Figure | undefined {
  const { loops } = result.examination.loops;
  const k = coverageFactors(result.coverage)(Number.POSITIVE_INFINITY);
  const dots = loops.flatMap(({ bands }, loop) =>
    bands
      .filter(({ standardised }) => Number.isFinite(standardised))
      .map((band): Dot => ({ loop, band, part: band.standardised / k })),
  );
  if (dots.length === 0) return undefined;
  const range: [number, number] = [
    dots.reduce((least, { band }) => Math.min(least, band.from), Number.POSITIVE_INFINITY),
    dots.reduce((most, { band }) => Math.max(most, band.to), 0),
  ];
  const scale = frequencyScale(range);
  const axis = levelAxis(
    dots.map(({ part }) => part),
    { height: HEIGHT, title: 'Closure / its limit', includes: [-1, 1] },
  );
  const place = ({ loop, band, part }: Dot) => {
    const [from, to] = [scale(band.from), scale(band.to)];
    // Loops side by side within a band, in the order of the list.
    const along = 0.15 + (0.7 * (loop + 0.5)) / loops.length;
    return `M${(INNER_WIDTH * (from + along * (to - from))).toFixed(0)} ${axis.y(part).toFixed(0)}h0`;
  };
  const pathOf = (isBeyond: boolean) =>
    // Dots on the same pixel are one.
    [...new Set(dots.filter(({ part }) => Math.abs(part) > 1 === isBeyond).map(place))].join('');
  const limits = [1, -1].map((limit) => element('path', { d: `M0 ${axis.y(limit)}h${INNER_WIDTH}`, class: 'limit' }));
  const within = { y: axis.y(1), width: '100%', height: axis.y(-1) - axis.y(1), class: 'limit-ground' };
  return {
    name: 'loops',
    ...figureTexts.loops(result, dots.length, dots.filter(({ part }) => Math.abs(part) > 1).length),
    drawing: {
      kind: 'plot',
      left: 56,
      right: 14,
      top: 30,
      bottom: 30,
      height: HEIGHT,
      inner: [INNER_WIDTH, HEIGHT],
      content:
        limits.join('') +
        element('path', { d: pathOf(false), class: 'dots within' }) +
        element('path', { d: pathOf(true), class: 'dots beyond' }),
      behind: element('rect', within) + axis.markup,
      over: '',
      range,
      axis: frequencyAxis(range, HEIGHT),
    },
    numbers: {
      columns: ['loop', 'from, Hz', 'to, Hz', 'closure, dB', 'U, dB', 'closure / U'],
      rows: () =>
        dots.map(({ loop, band, part }) => [
          `L${String(loop + 1).padStart(Math.max(2, String(loops.length).length), '0')}`,
          frequencyCell(band.from),
          frequencyCell(band.to),
          roundedCell(band.closure, k * band.uncertainty),
          figureText(k * band.uncertainty),
          part.toFixed(2),
        ]),
    },
    legend: [legendEntry('within ±U', 'dots within'), legendEntry('beyond', 'dots beyond')],
  };
}

function legendEntry(name: string, look: string): LegendEntry {
  const sample = element('path', { d: 'M14 7h0', class: look });
  return { name, sample, series: undefined, value: undefined, expanded: undefined };
}

/** A loop at the band where it closes worst. */
export interface WorstLoop {
  readonly name: string;
  readonly chain: string;
  readonly band: LoopBand;
  /** Expanded uncertainty of the closure in dB. */
  readonly expanded: number;
}

/** Loops by how badly they close in their worst band, worst first; those without an uncertainty are left out. */
export function worstLoops(result: Result, most: number): WorstLoop[] {
  const { loops } = result.examination.loops;
  const k = coverageFactors(result.coverage)(Number.POSITIVE_INFINITY);
  const digits = Math.max(2, String(loops.length).length);
  const size = ({ standardised }: LoopBand) => (Number.isFinite(standardised) ? Math.abs(standardised) : -1);
  return loops
    .flatMap(({ chain, bands }: LoopFinding, place) => {
      const band = bands.reduce<LoopBand | undefined>(
        (worst, one) => (worst === undefined || size(one) > size(worst) ? one : worst),
        undefined,
      );
      if (band === undefined || size(band) < 0) return [];
      const name = `L${String(place + 1).padStart(digits, '0')}`;
      return [{ name, chain: loopText(chain), band, expanded: k * band.uncertainty }];
    })
    .sort((a, b) => size(b.band) - size(a.band))
    .slice(0, most);
}
