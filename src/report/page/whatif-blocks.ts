/** Tables of the page of `whatif`. */
import { LADDER_STEPS } from '../../whatif/assumed-scatter.ts';
import { compareDesigns } from '../../whatif/compare.ts';
import type { PlannedSeating } from '../../whatif/design.ts';
import type { Prediction } from '../../whatif/predict.ts';
import { runSheet } from '../../whatif/run-sheet.ts';
import { escaped } from '../figures/markup.ts';
import { MOST_BARS } from '../figures/planned-figures.ts';
import { takesByRedundancy } from '../figures/planned-takes.ts';
import { placedUnit } from '../response-name.ts';
import type { SheetPlan } from '../whatif-result.ts';
import { chanceText } from '../whatif-text.ts';
import { COMPARED_NAMES, comparedText, figureText, stretchText, unitText } from '../whatif-wording.ts';
import { counted } from '../wording.ts';
import { table } from './blocks.ts';

const number = (name: string) => ({ name, isNumber: true });

/** A column a design, the best of each figure marked by a word as well as by weight. */
export function designsTable(predictions: readonly Prediction[]): string {
  const rows = compareDesigns(predictions).map(({ figure, values, isBest }) => [
    escaped(COMPARED_NAMES[figure]),
    ...values.map((value, d) => {
      const text = escaped(comparedText(figure, value));
      return isBest[d] ? `<b>${text} (best)</b>` : text;
    }),
  ]);
  return table(
    predictions.length > 1
      ? 'Figures of the worst band. Best: among designs that leave nothing open.'
      : 'Figures of the worst band. One design was asked about.',
    [{ name: 'Figure' }, ...predictions.map(({ bench }) => number(bench.design.name))],
    rows,
  );
}

/** What each unit will have in the worst band. */
export function unitsTable({ bands, worstBand }: Prediction, effect: number | undefined): string {
  const { units, scatter } = bands[worstBand]!;
  return table(
    `Standard uncertainty for three uses (${stretchText(scatter)}); effect: smallest change from partner to partner that would be found.`,
    [
      { name: 'Unit' },
      { name: 'Status' },
      number('u seated, dB'),
      number('u seated again, dB'),
      number('u other partner, dB'),
      number('Effect, dB'),
      ...(effect === undefined ? [] : [number(`Chance to find ${effect} dB`)]),
    ],
    units.map((unit) => [
      escaped(unitText(unit)),
      unit.status,
      ...[unit.asSeated, unit.reseated, unit.otherPartner, unit.smallestEffect].map(figureText),
      ...(effect === undefined ? [] : [escaped(chanceText(unit.chance))]),
    ]),
  );
}

/** Scatter and uncertainty band by band; nothing where one band serves all frequencies. */
export function bandsTable({ bands }: Prediction): string {
  if (bands.length < 2) return '';
  return table(
    'Band by band, all in dB. *: an assumption, not shown by the run.',
    [{ name: 'Band' }, ...[...LADDER_STEPS, 'u typical', 'u worst'].map(number)],
    bands.map(({ scatter, mean, worst }) => [
      escaped(stretchText(scatter)),
      ...LADDER_STEPS.map((step) => `${figureText(scatter[step])}${scatter.assumed.includes(step) ? '*' : ''}`),
      figureText(mean),
      figureText(worst),
    ]),
  );
}

/** The takes that are checked least. */
export function redundancyTable(prediction: Prediction): string {
  const takes = takesByRedundancy(prediction);
  const shown = takes.slice(0, MOST_BARS);
  return table(
    `${shown.length < takes.length ? `The ${shown.length} takes that are checked least, of ${takes.length}` : counted(takes.length, 'take')}. Shift: smallest constant shift of one take that would be found.`,
    [{ name: 'Take' }, { name: 'Pair' }, number('Redundancy'), number('Shift, dB')],
    shown.map(({ id, pair, redundancy, smallestShift, isChecked }) => [
      escaped(id),
      escaped(pair),
      redundancy.toFixed(2),
      isChecked ? figureText(smallestShift) : '<b>unchecked</b>',
    ]),
  );
}

const BOX = '<span role="img" aria-label="box to tick">\u2610</span>';

/** The takes to come in their order, with a box each and what is mounted before it. */
export function runTable(seatings: readonly PlannedSeating[], sheet: SheetPlan | undefined): string {
  const takes = sheet?.takes ?? runSheet(seatings);
  const isLong = takes.some(({ seating }) => seating.session !== '');
  const namesFile = sheet !== undefined && sheet.frequencies.length === 0;
  const end = (unit: string, mount: string, label: string) =>
    `${escaped(placedUnit({ unit, mount }))}${label === '' ? '' : ` <span class="faint">(seating ${escaped(label)})</span>`}`;
  return table(
    `${counted(takes.length, 'take')} to come. A unit that is not to be mounted stays untouched.`,
    [
      number('No.'),
      { name: 'Done' },
      ...(isLong ? [{ name: 'Session' }] : []),
      { name: 'Mount first' },
      { name: 'Emitter' },
      { name: 'Receiver' },
      number('Repeat'),
      ...(namesFile ? [{ name: 'Save as' }] : []),
      { name: 'Remark' },
    ],
    takes.map(({ number: place, seating, emitterSeating, receiverSeating, repeat, mounts, file }) => {
      const remarks = [seating.kind === 'control' ? 'control' : '', seating.path === '' ? '' : `over ${seating.path}`];
      return [
        String(place),
        BOX,
        ...(isLong ? [escaped(seating.session)] : []),
        mounts.length === 0 ? '–' : escaped(mounts.join(', ')),
        end(seating.emitter, seating.emitterMount, emitterSeating),
        end(seating.receiver, seating.receiverMount, receiverSeating),
        String(repeat),
        ...(namesFile ? [escaped(file)] : []),
        escaped(remarks.filter((text) => text !== '').join('; ')),
      ];
    }),
  );
}
