import type { ScatterStep } from '../estimate/scatter-step.ts';
import { type Column, csvFile } from './csv-file.ts';
import { figureCell, frequencyCell } from './number-text.ts';
import type { OutputFile, Result } from './result.ts';

const COLUMNS: readonly Column<ScatterStep>[] = [
  { name: 'band_from_hz', text: (step) => frequencyCell(step.from) },
  { name: 'band_to_hz', text: (step) => frequencyCell(step.to) },
  { name: 'repeat_db', text: (step) => figureCell(step.repeat.sd) },
  { name: 'repeat_dof', text: (step) => dofCell(step.repeat) },
  { name: 'reseat_db', text: (step) => figureCell(step.reseat.sd) },
  { name: 'reseat_dof', text: (step) => dofCell(step.reseat) },
  { name: 'partner_db', text: (step) => figureCell(step.partner.sd) },
  { name: 'partner_dof', text: (step) => dofCell(step.partner) },
  { name: 'f_reseat', text: (step) => figureCell(step.fReseat) },
  { name: 'p_reseat', text: (step) => figureCell(step.pReseat) },
  { name: 'f_partner', text: (step) => figureCell(step.fPartner) },
  { name: 'p_partner', text: (step) => figureCell(step.pPartner) },
  { name: 'verdict', text: (step) => step.verdict },
];

// A step that cannot be shown has no degrees of freedom to tell of.
function dofCell({ sd, dof }: ScatterStep['repeat']): string {
  return Number.isNaN(sd) ? '' : figureCell(dof);
}

/** `scatter.csv`: repeat, reseat and partner scatter, third-octave by third-octave. */
export function scatterTable({ examination }: Result): OutputFile {
  return csvFile('scatter.csv', COLUMNS, () => examination.scatter);
}
