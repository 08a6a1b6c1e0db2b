import { roundedText } from '../../quantity/rounding.ts';
import { escaped } from '../figures/markup.ts';
import { bandsWith, unitHolds } from '../held-bands.ts';
import { holdsCell } from '../hold-wording.ts';
import { placedUnit, responseName } from '../response-name.ts';
import type { Result } from '../result.ts';
import { percentText } from '../wording.ts';
import { table } from './blocks.ts';

/** The units with their typical level, expanded uncertainty for the three uses, and the bands in which they hold. */
export function unitTable({ examination, model, coverage }: Result): string {
  const holds = new Map(unitHolds(examination.holds).map((hold) => [hold.name, hold]));
  const hasCounts = examination.units.some(({ counts }) => counts.datum + counts.open > 0);
  const expanded = (value: number) => (Number.isNaN(value) ? 'none' : roundedText(value, value));
  const rows = examination.units.map((unit) => {
    const response = model.responses[unit.response]!;
    const hold = holds.get(placedUnit(response));
    const isBroken = hold !== undefined && bandsWith(hold, 'broken') > 0;
    const { ok, datum, open } = unit.counts;
    const level = Number.isNaN(unit.medianLevel) ? 'none' : roundedText(unit.medianLevel, unit.medianExpanded);
    return [
      escaped(responseName(response)),
      level.replace('-', '\u2212'),
      expanded(unit.medianExpanded),
      expanded(unit.medianUncertainty),
      expanded(unit.medianReseatUncertainty),
      expanded(unit.medianPartnerUncertainty),
      ...(hasCounts ? [ok, datum, open].map(String) : []),
      `${escaped(holdsCell(hold))}${isBroken ? ' <b>(broken in part)</b>' : ''}`,
    ];
  });
  const number = (name: string) => ({ name, isNumber: true });
  return table(
    `Typical values over frequency. U: expanded uncertainty (${percentText(coverage)}) as seated here; u: standard uncertainty for three uses.`,
    [
      { name: 'Unit' },
      number('Level, dB'),
      number('U, dB'),
      number('u seated, dB'),
      number('u seated again, dB'),
      number('u other partner, dB'),
      ...(hasCounts ? [number('ok'), number('datum'), number('open')] : []),
      { name: 'Holds' },
    ],
    rows,
  );
}
