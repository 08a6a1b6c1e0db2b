import type { HoldFinding } from '../findings/holds.ts';
import { type Column, csvFile } from './csv-file.ts';
import { figureCell, frequencyCell } from './number-text.ts';
import type { OutputFile, Result } from './result.ts';

const COLUMNS: readonly Column<HoldFinding>[] = [
  { name: 'unit', text: (hold) => hold.unit },
  { name: 'mount', text: (hold) => hold.mount },
  { name: 'band_from_hz', text: (hold) => frequencyCell(hold.from) },
  { name: 'band_to_hz', text: (hold) => frequencyCell(hold.to) },
  { name: 'partner_db', text: (hold) => figureCell(hold.partner) },
  { name: 'low_db', text: (hold) => figureCell(hold.low) },
  { name: 'high_db', text: (hold) => figureCell(hold.high) },
  { name: 'p_value', text: (hold) => figureCell(hold.pValue) },
  { name: 'verdict', text: (hold) => hold.verdict },
];

/** `holds.csv`: whether a unit's response depends on its partner, unit by unit and third-octave by third-octave. */
export function holdsTable({ examination }: Result): OutputFile {
  return csvFile('holds.csv', COLUMNS, () => examination.holds);
}
