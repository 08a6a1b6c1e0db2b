import { figureTexts } from '../figure-wording.ts';
import { frequencyCell } from '../number-text.ts';
import type { Result } from '../result.ts';
import { flaggedTakes, tieGroups } from '../take-wording.ts';
import { spread } from './end-labels.ts';
import type { Figure } from './figure.ts';
import { frequencyAxis, frequencyRange, frequencyScale } from './frequency-axis.ts';
import { element, escaped } from './markup.ts';
import { type ResidualCells, residualCells } from './residual-cells.ts';
import { type ResidualSteps, residualSteps, stepOf } from './residual-steps.ts';

/** Units of the inner drawing along frequency: fine enough for zooming in. */
const WIDTH = 8000;
/** Pixels of a row, and of the whole. */
const ROW = { least: 2.4, most: 16 };
const TALLEST = 560;

/** Takes × frequency with the residual as colour; takes that disagree are named beside it. */
export function residualMap(result: Result): Figure {
  const cells = residualCells(result);
  const { frequencies, takes } = result.set;
  const row = Math.max(ROW.least, Math.min(ROW.most, TALLEST / cells.rows.length));
  const height = Math.round(row * cells.rows.length);
  const range = frequencyRange(frequencies);
  const shared = (takes.length * frequencies.length) / (cells.rows.length * cells.columns.length);
  const steps = residualSteps(result.examination.whole.residualDeviation, shared);
  return {
    name: 'residuals',
    ...figureTexts.residuals(result, cells, steps),
    drawing: {
      kind: 'plot',
      left: 96,
      right: 14,
      top: 6,
      bottom: 30,
      height,
      // Two units a row, so that its middle is a whole number.
      inner: [WIDTH, 2 * cells.rows.length],
      content: cellPaths(cells, steps, columnEdges(cells, frequencies, range)),
      behind: '',
      over: rowLabels(result, cells, row, height),
      range,
      axis: frequencyAxis(range, height),
    },
    numbers: {
      columns: [
        'take',
        'emitter',
        'receiver',
        ...cells.columns.map(({ start, end }) => {
          const [from, to] = [frequencyCell(frequencies[start]!), frequencyCell(frequencies[end - 1]!)];
          return end - start === 1 ? `${from} Hz` : `${from}–${to} Hz`;
        }),
      ],
      rows: function* () {
        const width = cells.columns.length;
        for (const [r, { start, end }] of cells.rows.entries()) {
          const values = Array.from(cells.residual.subarray(r * width, (r + 1) * width), residualText);
          const [first, last] = [takes[start]!, takes[end - 1]!];
          const names =
            end - start === 1 ? [first.id, first.emitter, first.receiver] : [`${first.id}–${last.id}`, '', ''];
          yield [...names, ...values];
        }
      },
    },
    legend: legendOf(steps),
  };
}

function residualText(value: number): string {
  if (Number.isNaN(value)) return '';
  const text = value.toFixed(2);
  return Number(text) === 0 ? '0' : text;
}

/** Edges of the columns halfway between frequencies, in units of the inner drawing. */
function columnEdges(
  { columns }: ResidualCells,
  frequencies: Float64Array,
  range: readonly [number, number],
): number[] {
  const scale = frequencyScale(range);
  const edge = (f: number) => {
    if (f === 0) return range[0];
    if (f === frequencies.length) return range[1];
    return Math.sqrt(frequencies[f - 1]! * frequencies[f]!);
  };
  return [0, ...columns.map(({ end }) => end)].map((f) => Math.round(WIDTH * scale(edge(f))));
}

/** A path a colour: strokes as thick as a row, neighbours of one colour in one. */
function cellPaths({ rows, columns, residual }: ResidualCells, steps: ResidualSteps, edges: readonly number[]): string {
  const paths = new Map<string, string>();
  for (const r of rows.keys()) {
    for (let c = 0; c < columns.length; ) {
      const look = lookOf(residual[r * columns.length + c]!, steps);
      let end = c + 1;
      while (end < columns.length && lookOf(residual[r * columns.length + end]!, steps) === look) end++;
      if (look !== '') {
        paths.set(look, `${paths.get(look) ?? ''}M${edges[c]} ${2 * r + 1}h${edges[end]! - edges[c]!}`);
      }
      c = end;
    }
  }
  return [...paths.entries()]
    .map(([look, d]) => element('path', { d, class: `cells ${look}`, 'stroke-width': 2 }))
    .join('');
}

function lookOf(residual: number, steps: ResidualSteps): string {
  const step = stepOf(residual, steps);
  return step < 0 ? '' : `${residual > 0 ? 'above' : 'below'} s${step}`;
}

/** Names of takes that disagree, and of every so many others, moved apart where they would meet. */
function rowLabels(result: Result, { rows }: ResidualCells, row: number, height: number): string {
  const rowOf = (t: number) => rows.findIndex(({ end }) => t < end);
  const { takes } = result.set;
  const named = [...flaggedTakes(result.examination), ...tieGroups(result.examination).flat()].slice(
    0,
    Math.floor(height / LABEL),
  );
  const labels = [...new Set(named.map(({ take }) => take))]
    .sort((a, b) => a - b)
    .map((t) => ({ id: takes[t]!.id, y: (rowOf(t) + 0.5) * row }));
  const places = spread(
    labels.map(({ y }) => y),
    LABEL,
    [6, height - 4],
  );
  const flagged = labels.map(({ id, y }, k) => {
    const at = places[k]!;
    const text = element('text', { x: -18, y: at + 4, class: 'end bold flagged' }, escaped(id));
    const link = element('a', { href: `#take-${id}` }, text);
    return link + element('path', { d: `M-14 ${at.toFixed(1)}h4L-2 ${y.toFixed(1)}`, class: 'leader' });
  });
  const isFree = (y: number) => places.every((place) => Math.abs(place - y) > LABEL);
  const others: string[] = [];
  let last = Number.NEGATIVE_INFINITY;
  for (const [r, { start }] of rows.entries()) {
    const y = (r + 0.5) * row;
    if (y - last < OTHERS || !isFree(y)) continue;
    last = y;
    others.push(element('text', { x: -8, y: y + 4, class: 'tick end' }, escaped(takes[start]!.id)));
  }
  return others.join('') + flagged.join('');
}

/** Pixels between labels of takes that disagree, and of others. */
const LABEL = 13;
const OTHERS = 56;

function legendOf(steps: ResidualSteps): Figure['legend'] {
  const look = (side: string, step: number) => {
    const bar = element('path', { d: 'M1 7h26', class: `cells ${side} s${step}`, 'stroke-width': 13 });
    return element('rect', { x: 1, y: 0.5, width: 26, height: 13, class: 'cell-line' }) + bar;
  };
  const entry = (name: string, sample: string) => ({
    name,
    sample,
    series: undefined,
    value: undefined,
    expanded: undefined,
  });
  const below = [3, 2, 1, 0].map((step) => entry(`\u2264 \u2212${steps[step]} dB`, look('below', step)));
  const above = [0, 1, 2, 3].map((step) => entry(`\u2265 +${steps[step]} dB`, look('above', step)));
  const blank = entry('between', element('rect', { x: 1, y: 0.5, width: 26, height: 13, class: 'cell-line' }));
  return [...below, blank, ...above];
}
