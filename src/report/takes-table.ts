import type { TakeFinding } from '../findings/examination.ts';
import type { Take } from '../takes/take-set.ts';
import { type Column, csvFile } from './csv-file.ts';
import { figureCell, frequencyCell, levelCell } from './number-text.ts';
import type { OutputFile, Result } from './result.ts';
import { adviceText, readsLike } from './take-wording.ts';

interface TakeRow {
  readonly take: Take;
  readonly finding: TakeFinding;
  readonly readsLike: string;
  readonly advice: string;
}

const COLUMNS: readonly Column<TakeRow>[] = [
  { name: 'take', text: ({ take }) => take.id },
  { name: 'file', text: ({ take }) => take.file },
  { name: 'line', text: ({ take }) => String(take.line) },
  { name: 'emitter', text: ({ take }) => take.emitter },
  { name: 'receiver', text: ({ take }) => take.receiver },
  { name: 'session', text: ({ take }) => take.session },
  { name: 'emitter_mount', text: ({ take }) => take.emitterMount },
  { name: 'receiver_mount', text: ({ take }) => take.receiverMount },
  { name: 'emitter_seating', text: ({ take }) => take.emitterSeating },
  { name: 'receiver_seating', text: ({ take }) => take.receiverSeating },
  { name: 'repeat', text: ({ take }) => take.repeat },
  { name: 'readings', text: ({ finding }) => String(finding.readings) },
  { name: 'rms_residual_db', text: ({ finding }) => levelCell(finding.rmsResidual) },
  { name: 'offset_db', text: ({ finding }) => levelCell(finding.offset) },
  { name: 'u_offset_db', text: ({ finding }) => figureCell(finding.offsetUncertainty) },
  { name: 'worst_from_hz', text: ({ finding }) => (finding.worst ? frequencyCell(finding.worst.from) : '') },
  { name: 'worst_to_hz', text: ({ finding }) => (finding.worst ? frequencyCell(finding.worst.to) : '') },
  { name: 'worst_db', text: ({ finding }) => levelCell(finding.worst?.level ?? Number.NaN) },
  { name: 'redundancy', text: ({ finding }) => figureCell(finding.redundancy) },
  { name: 'smallest_shift_db', text: ({ finding }) => figureCell(finding.smallestShift) },
  { name: 'p_value', text: ({ finding }) => figureCell(finding.pValue) },
  { name: 'verdict', text: ({ finding }) => (finding.verdict === 'not tested' ? '' : finding.verdict) },
  { name: 'reads_like', text: ({ readsLike }) => readsLike },
  { name: 'advice', text: ({ advice }) => advice },
];

/** `takes.csv`: how each take agrees with the rest, what it reads like where it does not, and what to do about it. */
export function takesTable(result: Result): OutputFile {
  const { set, examination, coverage } = result;
  return csvFile('takes.csv', COLUMNS, () =>
    examination.takes.map((finding) => ({
      take: set.takes[finding.take]!,
      finding,
      readsLike: readsLike(finding, coverage),
      advice: adviceText(result, finding),
    })),
  );
}
