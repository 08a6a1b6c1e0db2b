import type { Role } from '../../model/model.ts';
import { figureTexts } from '../figure-wording.ts';
import { joinedBands } from '../held-bands.ts';
import { frequencyCell } from '../number-text.ts';
import { placedUnit } from '../response-name.ts';
import type { Result } from '../result.ts';
import { curvePath, ribbonPath, thinned } from './curve.ts';
import { type EndLabel, endLabels, LABEL_DISTANCE } from './end-labels.ts';
import type { Figure, LegendEntry } from './figure.ts';
import { type FrequencyScale, frequencyAxis, frequencyRange, frequencyScale } from './frequency-axis.ts';
import { levelAxis } from './level-axis.ts';
import { markAt } from './mark-at.ts';
import { element, escaped } from './markup.ts';
import { roundedCell } from './numbers.ts';
import { seriesClass } from './palette.ts';
import { byRole, type ResponseCurve } from './response-curves.ts';
import { shortName } from './short-name.ts';

/** Inner width of plots over frequency, in units of their own; a unit is about a pixel. */
export const INNER_WIDTH = 1000;
const HEIGHT = 380;
/** Uncertainty bands of more curves than this would only grey the picture: they are in the readout and the table. */
const MOST_RIBBONS = 16;
/** Half of the height of hatching, in pixels, where the uncertainty is narrower than that. */
const HATCH = 7;

/** Level over log frequency with expanded uncertainty, one picture a role. */
export function responsesFigures(result: Result, all: readonly ResponseCurve[]): Figure[] {
  const groups = byRole(all);
  return groups.map(({ role, curves }) => responsesFigure(result, role, curves, groups.length > 1));
}

function responsesFigure(
  result: Result,
  role: Role,
  curves: readonly ResponseCurve[],
  isOneOfSeveral: boolean,
): Figure {
  const { frequencies } = result.set;
  const height = Math.max(HEIGHT, curves.length * LABEL_DISTANCE);
  const range = frequencyRange(frequencies);
  const scale = frequencyScale(range);
  const x = Float64Array.from(frequencies, (frequency) => INNER_WIDTH * scale(frequency));
  const axis = levelAxis(drawnLevels(curves), { height, title: 'Level, dB' });
  const name = isOneOfSeveral ? `responses-${role}` : 'responses';
  const hasRibbons = curves.length <= MOST_RIBBONS;
  const content = curves.map((curve) => {
    const hatches = curve.dependent.map((band) =>
      hatched(curve, band, { frequencies, x, y: axis.y, pattern: `hatch-${name}` }),
    );
    const ribbon = hasRibbons ? ribbonOf(curve, x, axis.y) : '';
    const path = curvePath(thinned({ x, y: curve.level.map(axis.y) }, INNER_WIDTH, INNER_WIDTH));
    const line = element('path', { d: path, class: `curve ${seriesClass(curve.place)}` });
    return element('g', { class: seriesOf(curve) }, ribbon + hatches.join('') + line);
  });
  const texts = figureTexts.responses(result, curves, {
    role: isOneOfSeveral ? role : 'both',
    hasRibbons,
    isThinned: x.length > 2 * INNER_WIDTH,
  });
  return {
    name,
    ...texts,
    drawing: {
      kind: 'plot',
      left: 56,
      right: 72,
      top: 30,
      bottom: 30,
      height,
      inner: [INNER_WIDTH, height],
      content: hatchPattern(name) + content.join(''),
      behind: axis.markup,
      over:
        curves.map((curve) => brokenMarks(curve, { frequencies, scale, y: axis.y })).join('') +
        endLabels(labelsOf(curves, axis.y), height),
      range,
      axis: frequencyAxis(range, height),
    },
    numbers: {
      columns: ['frequency, Hz', ...curves.flatMap((curve) => [`${curve.name}, dB`, `U(${curve.name}), dB`])],
      rows: function* () {
        for (const [f, frequency] of frequencies.entries()) {
          const cells = curves.flatMap(({ level, expanded }) => [
            roundedCell(level[f]!, expanded[f]!),
            roundedCell(expanded[f]!, expanded[f]!),
          ]);
          yield [frequencyCell(frequency), ...cells];
        }
      },
    },
    legend: curves.map((curve, k): LegendEntry => {
      const line = element('path', { d: 'M0 7h28', class: `curve ${seriesClass(curve.place)}` });
      return {
        name: curve.name,
        sample: line,
        series: seriesOf(curve),
        value: 1 + 2 * k,
        expanded: 2 + 2 * k,
      };
    }),
  };
}

/** A name of its own, since a page may hold several such pictures. */
function hatchPattern(name: string): string {
  return (
    `<defs><pattern id="hatch-${name}" width="6" height="6" patternUnits="userSpaceOnUse" patternTransform="rotate(45)">` +
    '<path d="M0 3h6" class="hatch"/></pattern></defs>'
  );
}

function seriesOf({ place }: ResponseCurve): string {
  return `series-${place}`;
}

function* drawnLevels(curves: readonly ResponseCurve[]): Iterable<number> {
  for (const { level, expanded } of curves) {
    for (const [f, value] of level.entries()) {
      const half = Number.isFinite(expanded[f]!) ? expanded[f]! : 0;
      yield value - half;
      yield value + half;
    }
  }
}

function ribbonOf(curve: ResponseCurve, x: Float64Array, y: (value: number) => number): string {
  const edge = (sign: 1 | -1) => curve.level.map((level, f) => y(level + sign * curve.expanded[f]!));
  const path = ribbonPath(x, edge(-1), edge(1), THINNING);
  return path === '' ? '' : element('path', { d: path, class: `ribbon ${seriesClass(curve.place)}` });
}

/** A column a pixel, about. */
export const THINNING = { width: INNER_WIDTH, columns: INNER_WIDTH };

interface Place {
  readonly frequencies: Float64Array;
  readonly x: Float64Array;
  readonly y: (value: number) => number;
  readonly pattern: string;
}

function hatched(
  curve: ResponseCurve,
  band: ResponseCurve['dependent'][number],
  { frequencies, x, y, pattern }: Place,
): string {
  if (band.verdict !== 'broken') return '';
  const edge = (sign: 1 | -1) =>
    Float64Array.from(frequencies, (frequency, f) => {
      if (frequency < band.from || frequency >= band.to) return Number.NaN;
      const middle = y(curve.level[f]!);
      const half = Math.abs(y(curve.level[f]! + curve.expanded[f]!) - middle);
      return middle - sign * Math.max(HATCH, Number.isNaN(half) ? 0 : half);
    });
  return element('path', { d: ribbonPath(x, edge(-1), edge(1), THINNING), fill: `url(#${pattern})`, stroke: 'none' });
}

/** The unit's name over the bands in which it is broken. */
function brokenMarks(
  curve: ResponseCurve,
  {
    frequencies,
    scale,
    y,
  }: { readonly frequencies: Float64Array; readonly scale: FrequencyScale; readonly y: Place['y'] },
): string {
  const marks = joinedBands(curve.dependent.filter(({ verdict }) => verdict === 'broken')).map(({ from, to }) => {
    const levels = curve.level.filter((_, f) => frequencies[f]! >= from && frequencies[f]! < to);
    const top = y(Math.max(...levels));
    if (!Number.isFinite(top)) return '';
    const part = scale(Math.sqrt(from * to));
    const text = escaped(`${shortName(curve.name, 12)} broken`);
    return markAt(part, { y: Math.max(12, top - 2 * HATCH), class: 'middle small bold flagged halo' }, text);
  });
  return element('g', { class: seriesOf(curve) }, marks.join(''));
}

function labelsOf(curves: readonly ResponseCurve[], y: (value: number) => number): EndLabel[] {
  return curves.flatMap((curve) => {
    const last = curve.level.findLast((value) => !Number.isNaN(value));
    if (last === undefined) return [];
    // The title tells the role.
    return [{ name: placedUnit(curve.response), y: y(last), class: seriesClass(curve.place), series: seriesOf(curve) }];
  });
}
