import type { TakeFinding } from '../../findings/examination.ts';
import { coverageFactors } from '../../numeric/student-t.ts';
import { figureTexts } from '../figure-wording.ts';
import { frequencyCell } from '../number-text.ts';
import type { Result } from '../result.ts';
import { explanationName, likelyExplanations } from '../take-wording.ts';
import { curvePath, ribbonPath, thinned } from './curve.ts';
import type { Figure } from './figure.ts';
import { frequencyAxis, frequencyRange, frequencyScale } from './frequency-axis.ts';
import { levelAxis } from './level-axis.ts';
import { element } from './markup.ts';
import { roundedCell } from './numbers.ts';
import { INNER_WIDTH, THINNING } from './responses-figure.ts';

const HEIGHT = 220;
/** Explanations drawn over a take, the best first: more would hide it. */
const MOST_EXPLANATIONS = 3;
/** Colour and dash of the explanations in their order. */
const LOOKS = ['c1 d0', 'c3 d1', 'c4 d2'] as const;

/** What a take deviates by, with what it reads like drawn over it. Without an explanation, its residual alone. */
export function takeFigure(result: Result, finding: TakeFinding): Figure {
  const { set, solution, coverage } = result;
  const { frequencies } = set;
  const width = frequencies.length;
  const start = finding.take * width;
  const explained = finding.explained;
  const deviation = explained?.deviation ?? solution.residuals.subarray(start, start + width);
  const u = explained?.uncertainty ?? solution.readingUncertainty.values.subarray(start, start + width);
  const factor = coverageFactors(coverage)(Number.POSITIVE_INFINITY);
  const expanded = u.map((value) => factor * value);
  const likely = explained === undefined ? [] : likelyExplanations(explained).slice(0, MOST_EXPLANATIONS);
  const curves = likely.map((explanation) => explained!.ranked.find((one) => one.explanation === explanation)!);
  const range = frequencyRange(frequencies);
  const scale = frequencyScale(range);
  const x = Float64Array.from(frequencies, (frequency) => INNER_WIDTH * scale(frequency));
  const half = expanded.map((value) => (Number.isFinite(value) ? value : 0));
  const drawn = [...deviation.entries()].flatMap(([f, value]) => [
    value - half[f]!,
    value + half[f]!,
    ...curves.map(({ curve }) => curve[f]!),
  ]);
  const axis = levelAxis(drawn, { height: HEIGHT, title: 'Off the rest, dB', includes: [0] });
  const path = (values: Float64Array, look: string) =>
    element('path', {
      d: curvePath(thinned({ x, y: values.map(axis.y) }, INNER_WIDTH, INNER_WIDTH)),
      class: `curve ${look}`,
    });
  const edge = (sign: 1 | -1) => deviation.map((value, f) => axis.y(value + sign * expanded[f]!));
  const ribbon = element('path', { d: ribbonPath(x, edge(-1), edge(1), THINNING), class: 'ribbon c6' });
  const id = set.takes[finding.take]!.id;
  const names = curves.map(({ explanation }) => explanationName(explanation));
  return {
    name: `take-${id}`,
    ...figureTexts.take(result, finding, names),
    drawing: {
      kind: 'plot',
      left: 56,
      right: 14,
      top: 30,
      bottom: 30,
      height: HEIGHT,
      inner: [INNER_WIDTH, HEIGHT],
      content:
        element('g', { class: 'series-take' }, ribbon + path(deviation, 'c6 d0')) +
        curves
          .map(({ curve }, k) => element('g', { class: `series-read-${k}` }, path(curve, `${LOOKS[k]!} thick`)))
          .join(''),
      behind: axis.markup,
      over: '',
      range,
      axis: frequencyAxis(range, HEIGHT),
    },
    numbers: {
      columns: ['frequency, Hz', 'off the rest, dB', 'U, dB', ...names.map((name) => `${name}, dB`)],
      rows: function* () {
        for (const [f, frequency] of frequencies.entries()) {
          yield [
            frequencyCell(frequency),
            roundedCell(deviation[f]!, expanded[f]!),
            roundedCell(expanded[f]!, expanded[f]!),
            ...curves.map(({ curve }) => roundedCell(curve[f]!, expanded[f]!)),
          ];
        }
      },
    },
    legend: [
      {
        name: `${id}, off what the others say`,
        sample: element('path', { d: 'M0 7h28', class: 'curve c6 d0' }),
        series: 'series-take',
        value: 1,
        expanded: 2,
      },
      ...names.map((name, k) => ({
        name: `reads like: ${name}`,
        sample: element('path', { d: 'M0 7h28', class: `curve ${LOOKS[k]!} thick` }),
        series: `series-read-${k}`,
        value: 3 + k,
        expanded: undefined,
      })),
    ],
  };
}
