import type { TakeFinding } from '../findings/examination.ts';
import type { Take } from '../takes/take-set.ts';
import { type Column, csvFile } from './csv-file.ts';
import { figureCell, frequencyCell, levelCell } from './number-text.ts';
import type { OutputFile, Result } from './result.ts';

interface TakeRow {
  readonly take: Take;
  readonly finding: TakeFinding;
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
];

/** `takes.csv`: how each take agrees with the rest. */
export function takesTable({ set, examination }: Result): OutputFile {
  return csvFile('takes.csv', COLUMNS, () =>
    examination.takes.map((finding) => ({ take: set.takes[finding.take]!, finding })),
  );
}
