import type { LadderStep, ScatterStep } from '../../estimate/scatter-step.ts';
import { figureTexts } from '../figure-wording.ts';
import { frequencyCell } from '../number-text.ts';
import type { Result } from '../result.ts';
import { curvePath } from './curve.ts';
import { type EndLabel, endLabels } from './end-labels.ts';
import type { Figure } from './figure.ts';
import { frequencyAxis, frequencyScale } from './frequency-axis.ts';
import { levelAxis } from './level-axis.ts';
import { element } from './markup.ts';
import { figureText } from './numbers.ts';
import { INNER_WIDTH } from './responses-figure.ts';

const HEIGHT = 280;
const STEPS: readonly LadderStep[] = ['repeat', 'reseat', 'partner'];
/** Colour and dash of each step. */
const CLASSES: Readonly<Record<LadderStep, string>> = { repeat: 'c0 d0', reseat: 'c1 d1', partner: 'c3 d2' };

/** Repeat, reseat and partner scatter over frequency; absent where no band shows any of them. */
export function scatterFigure(result: Result): Figure | undefined {
  const bands = result.examination.scatter;
  const shown = STEPS.filter((step) => bands.some((band) => !Number.isNaN(band[step].sd)));
  if (shown.length === 0) return undefined;
  const range: [number, number] = [bands[0]!.from, bands.at(-1)!.to];
  const scale = frequencyScale(range);
  const axis = levelAxis(drawn(bands, shown), { height: HEIGHT, title: 'Standard deviation, dB', from: 0 });
  const content = shown.map((step, place) => {
    const line = element('path', { d: stepPath(bands, step, scale, axis.y), class: `curve ${CLASSES[step]}` });
    const whiskers = element('path', {
      d: whiskerPath(bands, step, scale, axis.y, place),
      class: `curve ${CLASSES[step].split(' ')[0]}`,
      'stroke-opacity': 0.55,
    });
    return element('g', { class: `series-${step}` }, whiskers + line);
  });
  const labels = shown.map((step): EndLabel => {
    const last = bands.findLast((band) => !Number.isNaN(band[step].sd))!;
    return { name: step, y: axis.y(last[step].sd), class: CLASSES[step], series: `series-${step}` };
  });
  return {
    name: 'scatter',
    ...figureTexts.scatter(result, shown),
    drawing: {
      kind: 'plot',
      left: 56,
      right: 72,
      top: 30,
      bottom: 30,
      height: HEIGHT,
      inner: [INNER_WIDTH, HEIGHT],
      content: content.join(''),
      behind: axis.markup,
      over: endLabels(labels, HEIGHT),
      range,
      axis: frequencyAxis(range, HEIGHT),
    },
    numbers: {
      columns: [
        'from, Hz',
        'to, Hz',
        ...STEPS.flatMap((step) => [`${step}, dB`, `${step} low, dB`, `${step} high, dB`]),
        'stands out',
      ],
      rows: () =>
        bands.map((band) => [
          frequencyCell(band.from),
          frequencyCell(band.to),
          ...STEPS.flatMap((step) => [band[step].sd, band[step].low, band[step].high].map(figureText)),
          band.verdict,
        ]),
    },
    legend: shown.map((step) => ({
      name: LEGEND[step],
      sample: element('path', { d: 'M0 7h28', class: `curve ${CLASSES[step]}` }),
      series: `series-${step}`,
      value: 2 + 3 * STEPS.indexOf(step),
      expanded: undefined,
    })),
  };
}

const LEGEND: Readonly<Record<LadderStep, string>> = {
  repeat: 'repeat: taken again as it sits',
  reseat: 'reseat: mounted again',
  partner: 'partner: against another unit',
};

function* drawn(bands: readonly ScatterStep[], steps: readonly LadderStep[]): Iterable<number> {
  for (const band of bands) for (const step of steps) yield Math.min(band[step].high, 3 * largestOf(bands, steps));
}

// An interval of few degrees of freedom may be very long: it must not flatten all that is known well.
function largestOf(bands: readonly ScatterStep[], steps: readonly LadderStep[]): number {
  return Math.max(...bands.flatMap((band) => steps.map((step) => band[step].sd)).filter((sd) => !Number.isNaN(sd)));
}

/** A flat step a band: the figure holds for the band as a whole. */
function stepPath(
  bands: readonly ScatterStep[],
  step: LadderStep,
  scale: (frequency: number) => number,
  y: (value: number) => number,
): string {
  const x = Float64Array.from(
    bands.flatMap(({ from, to }) => [from, to]),
    (edge) => INNER_WIDTH * scale(edge),
  );
  return curvePath({
    x,
    y: Float64Array.from(
      bands.flatMap((band) => [band[step].sd, band[step].sd]),
      y,
    ),
  });
}

function whiskerPath(
  bands: readonly ScatterStep[],
  step: LadderStep,
  scale: (frequency: number) => number,
  y: (value: number) => number,
  place: number,
): string {
  return bands
    .filter((band) => Number.isFinite(band[step].low) && Number.isFinite(band[step].high))
    .map((band) => {
      const [from, to] = [scale(band.from), scale(band.to)];
      // Side by side within the band, so that intervals do not hide each other.
      const x = INNER_WIDTH * (from + ((to - from) * (place + 1)) / 4);
      const top = Math.max(0, y(band[step].high));
      return `M${x.toFixed(1)} ${y(band[step].low).toFixed(1)}V${top.toFixed(1)}`;
    })
    .join('');
}
