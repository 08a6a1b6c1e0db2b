import { type Column, csvFile } from './csv-file.ts';
import { figureCell, frequencyCell, levelCell } from './number-text.ts';
import type { OutputFile, Result } from './result.ts';

type Difference = Result['examination']['mounts'][number];

interface MountRow {
  readonly difference: Difference;
  readonly point: Difference['points'][number];
}

const COLUMNS: readonly Column<MountRow>[] = [
  { name: 'unit', text: ({ difference: { unit, role } }) => (role === 'both' ? unit : `${unit} ${role}`) },
  { name: 'mount_a', text: ({ difference }) => difference.mountA },
  { name: 'mount_b', text: ({ difference }) => difference.mountB },
  { name: 'frequency_hz', text: ({ point }) => frequencyCell(point.frequency) },
  { name: 'difference_db', text: ({ point }) => levelCell(point.difference) },
  { name: 'u_db', text: ({ point }) => figureCell(point.uncertainty) },
  { name: 'expanded_db', text: ({ point }) => figureCell(point.expanded) },
  { name: 'verdict', text: ({ point }) => point.verdict },
];

/** `mounts.csv`: by how much a unit's response in one mount differs from that in another (a less b). */
export function mountsTable({ examination }: Result): OutputFile {
  return csvFile('mounts.csv', COLUMNS, function* () {
    for (const difference of examination.mounts) for (const point of difference.points) yield { difference, point };
  });
}
