import { figureTexts } from '../figure-wording.ts';
import { frequencyCell } from '../number-text.ts';
import type { Result } from '../result.ts';
import { curvePath, ribbonPath, thinned } from './curve.ts';
import type { Figure, Plot } from './figure.ts';
import { frequencyAxis, frequencyRange, frequencyScale } from './frequency-axis.ts';
import { type LevelAxis, ratioAxis } from './level-axis.ts';
import { element } from './markup.ts';
import { roundedCell } from './numbers.ts';
import type { ResponseCurve } from './response-curves.ts';
import { INNER_WIDTH } from './responses-figure.ts';

const HEIGHT = 110;
/** A panel is about this many pixels wide. */
const COLUMNS = 300;
/** The three uses of a response, as they are stacked: each adds to the one before. */
const LOOKS = ['c0 d0', 'c1 d1', 'c3 d2'] as const;
const USES = ['as seated', 'seated again', 'other partner'] as const;

/** Expanded uncertainty for the three uses over frequency, a panel a unit; absent where there is none. */
export function uncertaintyFigure(result: Result, all: readonly ResponseCurve[]): Figure | undefined {
  const curves = all.filter(({ uses }) => uses.some((use) => use.some((value) => value >= 0)));
  if (curves.length === 0) return undefined;
  const { frequencies } = result.set;
  const shown = USES.filter((_, use) => curves.some(({ uses }) => uses[use]!.some((value) => value >= 0)));
  const axis = ratioAxis(drawn(curves), { height: HEIGHT, title: 'U, dB' });
  return {
    name: 'uncertainty',
    ...figureTexts.uncertainty(result, shown),
    drawing: {
      kind: 'panels',
      panels: curves.map((curve) => ({ title: curve.name, plot: panel(curve, frequencies, axis) })),
    },
    numbers: {
      columns: ['frequency, Hz', ...curves.flatMap(({ name }) => shown.map((use) => `${name} ${use}, dB`))],
      rows: function* () {
        for (const [f, frequency] of frequencies.entries()) {
          const cells = curves.flatMap(({ uses }) =>
            shown.map((use) => {
              const value = uses[USES.indexOf(use)]![f]!;
              return roundedCell(value, value);
            }),
          );
          yield [frequencyCell(frequency), ...cells];
        }
      },
    },
    legend: shown.map((use) => ({
      name: use,
      sample: element('path', { d: 'M0 7h28', class: `curve ${LOOKS[USES.indexOf(use)]!}` }),
      series: undefined,
      value: undefined,
      expanded: undefined,
    })),
  };
}

function* drawn(curves: readonly ResponseCurve[]): Iterable<number> {
  for (const { uses } of curves) for (const use of uses) yield* use;
}

function panel({ uses }: ResponseCurve, frequencies: Float64Array, axis: LevelAxis): Plot {
  const range = frequencyRange(frequencies);
  const scale = frequencyScale(range);
  const x = Float64Array.from(frequencies, (frequency) => INNER_WIDTH * scale(frequency));
  const layers = [0, 1, 2].map((use) => {
    const upper = uses[use]!.map((value) => axis.y(value));
    // What a use adds is the ground between its curve and the one below.
    const lower =
      use === 0 ? upper.map((y) => (Number.isNaN(y) ? y : HEIGHT)) : uses[use - 1]!.map((value) => axis.y(value));
    const ground = ribbonPath(x, lower, upper, { width: INNER_WIDTH, columns: COLUMNS });
    const curve = curvePath(thinned({ x, y: upper }, INNER_WIDTH, COLUMNS));
    return (
      (ground === '' ? '' : element('path', { d: ground, class: `use use-${use}` })) +
      (curve === '' ? '' : element('path', { d: curve, class: `curve ${LOOKS[use]!}` }))
    );
  });
  return {
    kind: 'plot',
    left: 56,
    right: 14,
    top: 24,
    bottom: 24,
    height: HEIGHT,
    inner: [INNER_WIDTH, HEIGHT],
    content: layers.join(''),
    behind: axis.markup,
    over: '',
    range,
    axis: frequencyAxis(range, HEIGHT),
  };
}
