import type { HoldFinding } from '../../findings/holds.ts';
import { figureTexts } from '../figure-wording.ts';
import { frequencyCell } from '../number-text.ts';
import { placedUnit } from '../response-name.ts';
import type { Result } from '../result.ts';
import { bandText } from '../wording.ts';
import type { Figure } from './figure.ts';
import { frequencyAxis, frequencyScale } from './frequency-axis.ts';
import { markAt } from './mark-at.ts';
import { element, escaped } from './markup.ts';
import { figureText } from './numbers.ts';
import { INNER_WIDTH } from './responses-figure.ts';
import { shortName } from './short-name.ts';

const ROW = 22;

type Verdict = HoldFinding['verdict'];

/** How a cell looks, and the letter in it: colour is never alone. */
const LOOKS: Readonly<Record<Verdict, { readonly class: string; readonly letter: string; readonly on: string }>> = {
  holds: { class: 'holds', letter: '', on: '' },
  strained: { class: 'strained', letter: 's', on: 'on-strain' },
  broken: { class: 'broken', letter: 'B', on: 'on-bad' },
  'not testable': { class: 'untestable', letter: '?', on: 'faint' },
};

/** Units × third-octave bands in four states; absent where nothing was judged. */
export function holdsFigure(result: Result): Figure | undefined {
  const { holds } = result.examination;
  if (holds.length === 0) return undefined;
  const units = [...new Set(holds.map(placedUnit))];
  const range: [number, number] = [Math.min(...holds.map(({ from }) => from)), Math.max(...holds.map(({ to }) => to))];
  const scale = frequencyScale(range);
  const height = units.length * ROW;
  const cells = holds.map((hold) => {
    const [from, to] = [INNER_WIDTH * scale(hold.from), INNER_WIDTH * scale(hold.to)];
    const box = { x: from, y: units.indexOf(placedUnit(hold)) * ROW, width: to - from, height: ROW };
    const { class: look } = LOOKS[hold.verdict];
    return element('rect', { ...box, class: `${look} cell-line` }, `<title>${escaped(cellText(hold))}</title>`);
  });
  const letters = holds.map((hold) => {
    const { letter, on } = LOOKS[hold.verdict];
    if (letter === '') return '';
    const y = units.indexOf(placedUnit(hold)) * ROW + ROW - 7;
    return markAt((scale(hold.from) + scale(hold.to)) / 2, { y, class: `middle small bold ${on}` }, letter);
  });
  const names = units.map((unit, row) =>
    element('text', { x: -8, y: row * ROW + 15, class: 'end' }, escaped(shortName(unit, 12))),
  );
  return {
    name: 'holds',
    ...figureTexts.holds(result, units),
    drawing: {
      kind: 'plot',
      left: 96,
      right: 14,
      top: 6,
      bottom: 30,
      height,
      inner: [INNER_WIDTH, height],
      content: cells.join(''),
      behind: '',
      over: letters.join('') + names.join(''),
      range,
      axis: frequencyAxis(range, height),
    },
    numbers: {
      columns: ['unit', 'from, Hz', 'to, Hz', 'partner, dB', 'low, dB', 'high, dB', 'p', 'verdict'],
      rows: () =>
        holds.map((hold) => [
          placedUnit(hold),
          frequencyCell(hold.from),
          frequencyCell(hold.to),
          ...[hold.partner, hold.low, hold.high].map(figureText),
          Number.isFinite(hold.pValue) ? hold.pValue.toPrecision(2) : '',
          hold.verdict,
        ]),
    },
    legend: (Object.keys(LOOKS) as Verdict[]).map((verdict) => ({
      name: LEGEND[verdict](result.tolerance),
      sample:
        element('rect', { x: 2, y: 0.5, width: 24, height: 13, class: `${LOOKS[verdict].class} cell-line` }) +
        element('text', { x: 14, y: 11, class: `middle small bold ${LOOKS[verdict].on}` }, LOOKS[verdict].letter),
      series: undefined,
      value: undefined,
      expanded: undefined,
    })),
  };
}

const LEGEND: Readonly<Record<Verdict, (tolerance: number) => string>> = {
  holds: () => 'holds',
  strained: (tolerance) => `strained: depends on the partner, not surely by more than ${tolerance} dB`,
  broken: (tolerance) => `broken: surely by more than ${tolerance} dB`,
  'not testable': () => 'not testable',
};

function cellText(hold: HoldFinding): string {
  const size = Number.isFinite(hold.partner)
    ? `, ${figureText(hold.partner)} dB (${figureText(hold.low)} to ${figureText(hold.high)})`
    : '';
  return `${placedUnit(hold)}, ${bandText(hold)}: ${hold.verdict}${size}`;
}
