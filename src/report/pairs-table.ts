import type { PairFinding } from '../findings/examination.ts';
import { type Column, csvFile } from './csv-file.ts';
import { figureCell, levelCell } from './number-text.ts';
import type { OutputFile, Result } from './result.ts';

const COLUMNS: readonly Column<PairFinding>[] = [
  { name: 'emitter', text: (pair) => pair.emitter },
  { name: 'receiver', text: (pair) => pair.receiver },
  { name: 'takes', text: (pair) => String(pair.takes.length) },
  { name: 'rms_residual_db', text: (pair) => levelCell(pair.rmsResidual) },
  { name: 'offset_db', text: (pair) => levelCell(pair.offset) },
  { name: 'redundancy', text: (pair) => figureCell(pair.redundancy) },
  { name: 'p_value', text: (pair) => figureCell(pair.pValue) },
  { name: 'verdict', text: (pair) => (pair.verdict === 'not tested' ? '' : pair.verdict) },
];

/** `pairs.csv`: all takes of an emitter and a receiver together, with their number. */
export function pairsTable({ examination }: Result): OutputFile {
  return csvFile('pairs.csv', COLUMNS, () => examination.pairs);
}
