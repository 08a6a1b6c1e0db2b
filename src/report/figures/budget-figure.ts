import type { ResponseBudget } from '../../estimate/budget.ts';
import { figureTexts } from '../figure-wording.ts';
import { frequencyCell } from '../number-text.ts';
import { responseName } from '../response-name.ts';
import type { Result } from '../result.ts';
import type { Figure, Plot } from './figure.ts';
import { frequencyAxis, frequencyScale } from './frequency-axis.ts';
import { levelAxis } from './level-axis.ts';
import { markAt } from './mark-at.ts';
import { element, escaped } from './markup.ts';
import { figureText } from './numbers.ts';
import { INNER_WIDTH } from './responses-figure.ts';

const HEIGHT = 110;
/** Sources with a colour and a letter of their own; the rest are one. */
const MOST_SOURCES = 6;
const REST = 'other sources';
/** Pixels that a letter needs. */
const LETTER = 13;

/** Shares of the variance by source over frequency, a panel a response; absent without a budget. */
export function budgetFigure(result: Result): Figure | undefined {
  const { budget = [], model } = result;
  const responses = [...new Set(budget.map(({ response }) => response))].sort((a, b) => a - b);
  if (responses.length === 0) return undefined;
  const sources = rankedSources(budget);
  const range: [number, number] = [
    budget.reduce((least, { from }) => Math.min(least, from), Number.POSITIVE_INFINITY),
    budget.reduce((most, { to }) => Math.max(most, to), 0),
  ];
  return {
    name: 'budget',
    ...figureTexts.budget(result, sources),
    drawing: {
      kind: 'panels',
      panels: responses.map((response) => ({
        title: responseName(model.responses[response]!),
        plot: panel(
          budget.filter((one) => one.response === response),
          sources,
          range,
        ),
      })),
    },
    numbers: {
      columns: ['response', 'from, Hz', 'to, Hz', 'u, dB', ...sources.map((source) => `${source}, %`)],
      rows: () =>
        budget.map((band) => [
          responseName(model.responses[band.response]!),
          frequencyCell(band.from),
          frequencyCell(band.to),
          figureText(band.uncertainty),
          ...sharesOf(band, sources).map((share) => (100 * share).toFixed(1)),
        ]),
    },
    legend: sources.map((source, s) => ({
      name: source,
      sample:
        element('rect', { x: 1, y: 0.5, width: 26, height: 13, class: `part part-${s}` }) +
        element('text', { x: 14, y: 11, class: 'middle small bold' }, letterOf(s)),
      series: undefined,
      value: undefined,
      expanded: undefined,
    })),
  };
}

function letterOf(source: number): string {
  return String.fromCharCode(97 + source);
}

/** Names of the sources by their shares over all responses and bands, largest first; small ones are put together. */
function rankedSources(budget: readonly ResponseBudget[]): string[] {
  const sums = new Map<string, number>();
  for (const { parts } of budget) {
    for (const { source, share } of parts) if (share > 0) sums.set(source, (sums.get(source) ?? 0) + share);
  }
  const ranked = [...sums].sort((a, b) => b[1] - a[1]).map(([source]) => source);
  return ranked.length <= MOST_SOURCES ? ranked : [...ranked.slice(0, MOST_SOURCES - 1), REST];
}

function sharesOf({ parts }: ResponseBudget, sources: readonly string[]): number[] {
  const shares = sources.map(() => 0);
  for (const { source, share } of parts) {
    const own = sources.indexOf(source);
    const place = own < 0 ? sources.indexOf(REST) : own;
    if (place >= 0) shares[place] = shares[place]! + share;
  }
  return shares;
}

function panel(bands: readonly ResponseBudget[], sources: readonly string[], range: readonly [number, number]): Plot {
  const scale = frequencyScale(range);
  const axis = levelAxis([0, 100], { height: HEIGHT, title: 'Share of variance, %', from: 0 });
  const paths = sources.map(() => '');
  /** Of each source its tallest box, which has room for a letter. */
  const tallest = sources.map(() => ({ share: 0, at: 0, y: 0 }));
  for (const band of bands) {
    const [from, to] = [scale(band.from), scale(band.to)];
    const x = (part: number) => (INNER_WIDTH * part).toFixed(1);
    let below = 0;
    for (const [s, share] of sharesOf(band, sources).entries()) {
      if (share <= 0) continue;
      const [bottom, top] = [axis.y(100 * below), axis.y(Math.min(100, 100 * (below + share)))];
      paths[s] += `M${x(from)} ${bottom.toFixed(1)}V${top.toFixed(1)}H${x(to)}V${bottom.toFixed(1)}z`;
      if (share > tallest[s]!.share) tallest[s] = { share, at: (from + to) / 2, y: (bottom + top) / 2 };
      below += share;
    }
  }
  const letters = tallest.map(({ share, at, y }, s) =>
    share * HEIGHT < LETTER ? '' : markAt(at, { y: y + 4, class: 'middle small bold' }, escaped(letterOf(s))),
  );
  return {
    kind: 'plot',
    left: 56,
    right: 14,
    top: 24,
    bottom: 24,
    height: HEIGHT,
    inner: [INNER_WIDTH, HEIGHT],
    content: paths.map((d, s) => (d === '' ? '' : element('path', { d, class: `part part-${s}` }))).join(''),
    behind: axis.markup,
    over: letters.join(''),
    range,
    axis: frequencyAxis(range, HEIGHT),
  };
}
