import { LADDER_STEPS } from '../whatif/assumed-scatter.ts';
import { compareDesigns } from '../whatif/compare.ts';
import type { BandPrediction, Prediction } from '../whatif/predict.ts';
import { openSentence } from './open-wording.ts';
import type { TextStyle } from './result.ts';
import { listed } from './terminal-summary.ts';
import { type TableRow, TERMINAL_WIDTH, textTable, wrapped } from './text-layout.ts';
import type { WhatifResult } from './whatif-result.ts';
import { solveLine } from './whatif-sheet.ts';
import {
  COMPARED_NAMES,
  comparedText,
  costText,
  designSentence,
  designVerdict,
  figureText,
  meritValue,
  openAsTold,
  orderSentence,
  scatterSentence,
  seatingText,
  stretchText,
  suggestionSentences,
  timesSentence,
  unitText,
} from './whatif-wording.ts';
import { CAUTIONS, counted, percentText } from './wording.ts';

/** Rows of a table before the rest is only counted. */
const MOST_ROWS = 24;
const MOST_POINTS = 6;

/** What `whatif` says, at most 80 columns wide: the verdict first, then figures, then what they rest on. */
export function whatifText(result: WhatifResult, style: TextStyle): string {
  const { predictions, suggested, notices } = result;
  const main = predictions.at(-1)!;
  const sections: readonly (readonly string[])[] = [
    ...(predictions.length > 1
      ? [comparison(result, style)]
      : [wrapped(designSentence(main)), verdictLines(main, style)]),
    ...(suggested === undefined ? [] : [suggestionLines(result, style)]),
    ...(predictions.length > 1 && suggested === undefined
      ? predictions.map((prediction) => [
          style.strong(prediction.bench.design.name),
          ...verdictLines(prediction, style),
        ])
      : predictions.length > 1
        ? [[style.strong('With the suggested takes'), ...verdictLines(main, style)]]
        : []),
    ...(predictions.length > 1 && suggested === undefined
      ? []
      : [unitTable(main, result, style), takeTable(main, style)]),
    bandTable(main, style),
    listed('Open, or resting on a datum', openPoints(main), style),
    wrapped(orderSentence(result)),
    rehearsalLines(result, style),
    sheetLines(result),
    [...wrapped(scatterSentence(main.bands.map(({ scatter }) => scatter))), ...wrapped(timesSentence(result))],
    listed('Worth knowing', notices, style),
    wrapped(CAUTIONS.join(' ')).map(style.faint),
  ];
  const text = sections.filter((lines) => lines.length > 0).map((lines) => lines.join('\n'));
  return `${text.join('\n\n')}\n`;
}

function verdictLines(prediction: Prediction, style: TextStyle): string[] {
  return designVerdict(prediction).flatMap(({ text, tone }) =>
    wrapped(text).map((line) => (tone === 'plain' ? line : style[tone](line))),
  );
}

/** Designs that stand beside each other in 80 columns. */
const MOST_BESIDE = 5;

function comparison({ predictions }: WhatifResult, style: TextStyle): string[] {
  const figures = compareDesigns(predictions);
  const letters = predictions.map((_, d) => String.fromCharCode(65 + d));
  const legend = predictions.flatMap((prediction, d) =>
    wrapped(`${letters[d]}  ${designSentence(prediction)}`, { indent: '   ' }),
  );
  const tables: string[] = [];
  for (let from = 0; from < predictions.length; from += MOST_BESIDE) {
    const shown = letters.map((_, d) => d).slice(from, from + MOST_BESIDE);
    const rows = figures.map(({ figure, values, isBest }): TableRow => {
      const cell = (d: number) => `${comparedText(figure, values[d]!)} ${isBest[d] ? '*' : ' '}`;
      return { cells: [COMPARED_NAMES[figure], ...shown.map(cell)] };
    });
    tables.push(
      ...(from === 0 ? [] : ['']),
      ...textTable([{ cells: ['', ...shown.map((d) => `${letters[d]}  `)], style: style.strong }, ...rows]),
    );
  }
  return [
    ...legend,
    '',
    ...tables,
    ...wrapped('*: the best of them, among designs that leave nothing open.').map(style.faint),
  ];
}

function suggestionLines({ suggested, predictions }: WhatifResult, style: TextStyle): string[] {
  const { suggestion, criterion } = suggested!;
  const sentences = suggestionSentences(suggested!);
  const shown = suggestion.steps.slice(0, MOST_ROWS);
  const name = criterion === 'checks' ? 'smallest shift, dB' : criterion === 'worst' ? 'worst u, dB' : 'u, dB';
  const row = (label: string, merit: (typeof suggestion.steps)[number]['merit']): TableRow => {
    const value = meritValue(merit, criterion);
    return {
      cells: [
        label,
        merit.open === 0 ? '·' : String(merit.open),
        merit.open > 0 ? '' : String(merit.uncheckable),
        figureText(value),
      ],
    };
  };
  const before = suggestion.before === undefined ? [] : [row('as it was', suggestion.before)];
  const rows = shown.map(({ seating, merit }, k) => row(`${k + 1}. ${seatingText(seating)}`, merit));
  const more = suggestion.steps.length - shown.length;
  const cost = predictions.at(-1)!.cost;
  return [
    style.strong('Suggested takes, those first that bring most'),
    ...sentences.flatMap((text) => wrapped(text).map(text.startsWith('CANNOT') ? style.bad : (line) => line)),
    ...textTable([{ cells: ['with', 'open', 'unchecked', name], style: style.strong }, ...before, ...rows]),
    ...(more > 0 ? [`And ${counted(more, 'more pair')}: see --json or --out.`] : []),
    ...wrapped('open: responses without a level; unchecked: pairs that nothing checks').map(style.faint),
    ...wrapped(`All in all: ${costText(cost)}.`),
  ];
}

function unitTable({ bands, worstBand }: Prediction, { effect }: WhatifResult, style: TextStyle): string[] {
  const { units } = bands[worstBand]!;
  const header = ['unit', 'u, dB', 'reseated', 'partner', 'effect, dB', ...(effect === undefined ? [] : ['chance'])];
  const rows = units.slice(0, MOST_ROWS).map(
    (unit): TableRow => ({
      cells: [
        unitText(unit),
        ...[unit.asSeated, unit.reseated, unit.otherPartner, unit.smallestEffect].map(figureText),
        ...(effect === undefined ? [] : [chanceText(unit.chance)]),
      ],
      style: unit.status === 'open' ? style.warning : undefined,
    }),
  );
  const more = units.length - rows.length;
  const caption = [
    'u: standard uncertainty as seated; reseated: the unit mounted once more; partner: and on another partner',
    'effect: smallest change from partner to partner that would be found',
    ...(effect === undefined ? [] : [`chance: to find one of ${effect} dB`]),
  ];
  return [
    ...textTable([{ cells: header, style: style.strong }, ...rows]),
    ...(more > 0 ? [`And ${counted(more, 'more unit')}: see --json or --out.`] : []),
    ...differenceLines(bands[worstBand]!),
    ...wrapped(caption.join('; ')).map(style.faint),
  ];
}

function differenceLines({ differences, units }: BandPrediction): string[] {
  const { mean, worst, worstBetween, told, all } = differences;
  if (worstBetween === undefined) return [];
  const [one, other] = worstBetween.map((unit) => unitText(units[unit]!));
  const some = told === all ? 'Differences between units' : `${told} of ${counted(all, 'difference')} between units`;
  return wrapped(`${some}: u ${figureText(mean)} dB typical, ${figureText(worst)} dB worst (${one}, ${other}).`);
}

/** Pairs with their least checked take, those first that are checked least. */
function takeTable({ bench, bands, worstBand }: Prediction, style: TextStyle): string[] {
  const pairs = new Map<string, { takes: number; redundancy: number; shift: number }>();
  for (const { take, redundancy, smallestShift } of bands[worstBand]!.takes) {
    const key = seatingText(bench.design.seatings[bench.seatingOfTake[take]!]!);
    const own = pairs.get(key) ?? { takes: 0, redundancy: 1, shift: 0 };
    const shift = Number.isNaN(smallestShift) ? Number.POSITIVE_INFINITY : smallestShift;
    pairs.set(key, {
      takes: own.takes + 1,
      redundancy: Math.min(own.redundancy, redundancy),
      shift: Math.max(own.shift, shift),
    });
  }
  const sorted = [...pairs].sort(([, a], [, b]) => (a.shift === b.shift ? 0 : b.shift - a.shift));
  const rows = sorted.slice(0, MOST_ROWS).map(
    ([pair, { takes, redundancy, shift }]): TableRow => ({
      cells: [pair, String(takes), redundancy.toFixed(2), Number.isFinite(shift) ? figureText(shift) : 'unchecked'],
      style: Number.isFinite(shift) ? undefined : style.warning,
    }),
  );
  const more = sorted.length - rows.length;
  return [
    ...textTable([{ cells: ['pair', 'takes', 'redundancy', 'shift, dB'], style: style.strong }, ...rows]),
    ...(more > 0 ? [`And ${counted(more, 'more pair')}, checked no worse: see --json or --out.`] : []),
    ...wrapped(
      'redundancy: 0 needed to the full, 1 spare; shift: smallest constant shift of one take that would be found',
    ).map(style.faint),
  ];
}

function bandTable({ bands }: Prediction, style: TextStyle): string[] {
  if (bands.length < 2) return [];
  const rows = bands.slice(0, 2 * MOST_ROWS).map(
    ({ scatter, mean, worst }): TableRow => ({
      cells: [
        stretchText(scatter),
        ...LADDER_STEPS.map((step) => `${figureText(scatter[step])}${scatter.assumed.includes(step) ? '*' : ' '}`),
        figureText(mean),
        figureText(worst),
      ],
    }),
  );
  const header = ['band', ...LADDER_STEPS.map((step) => `${step} `), 'u typical', 'u worst'];
  return [
    ...textTable([{ cells: header, style: style.strong }, ...rows]),
    ...wrapped('all in dB; *: an assumption, not shown by the run').map(style.faint),
  ];
}

function openPoints(prediction: Prediction): string[] {
  const { open, frequencies } = openAsTold(prediction);
  const points = open.map((finding) => openSentence(finding, frequencies));
  const more = points.length - MOST_POINTS;
  return more > 0 ? [...points.slice(0, MOST_POINTS), `And ${counted(more, 'more')}.`] : points;
}

function rehearsalLines({ rehearsal, coverage }: WhatifResult, style: TextStyle): string[] {
  if (rehearsal === undefined) return [];
  const { runs, frequencies, predicted, seen, stated, covered, chance, planted, found, tied, fault, falseAlarms } =
    rehearsal;
  const rows = rehearsal.units.slice(0, MOST_ROWS).map(
    (unit): TableRow => ({
      cells: [unit.name, ...[unit.predicted, unit.seen, unit.stated].map(figureText), chanceText(unit.covered)],
    }),
  );
  const all = { cells: ['all', ...[predicted, seen, stated].map(figureText), chanceText(covered)] };
  const points = [
    `${counted(runs, 'run')} of ${frequencies} frequencies, solved without knowing the scatter. Seen and predicted u differ by chance by about ${percentText(Number(chance.toPrecision(1)))} for one unit.`,
    planted === 0
      ? 'No fault was planted, since nothing checks any take.'
      : `A shift of ${figureText(fault)} dB planted in one take: found in ${found} of ${counted(planted, 'run')}${tied > 0 ? `, tied with others in ${tied}` : ''}. Without it a take was flagged in ${falseAlarms}.`,
  ];
  return [
    style.strong('Rehearsal'),
    ...textTable([
      { cells: ['unit', 'predicted u', 'seen', 'stated', `in ${percentText(coverage)}`], style: style.strong },
      ...rows,
      all,
    ]),
    ...points.flatMap((point) => wrapped(point)),
  ];
}

export function chanceText(chance: number): string {
  return Number.isNaN(chance) ? 'none' : `${(100 * chance).toFixed(chance > 0.995 || chance < 0.1 ? 1 : 0)} %`;
}

function sheetLines({ sheet }: WhatifResult): string[] {
  if (sheet === undefined) return [];
  const { csv, page, takes, frequencies } = sheet;
  const fill =
    frequencies.length > 0
      ? 'Fill in level_db'
      : 'Save each spectrum under the name that the sheet gives it, beside the sheet';
  const text = `Run sheet of ${counted(takes.length, 'take')}: ${csv}, and ${page} to print. ${fill}; then: ${solveLine(sheet)}`;
  return wrapped(text, { width: TERMINAL_WIDTH });
}
