import type { ReadingColumn } from './column-vocabulary.ts';
import { pairOf } from './read-wide.ts';
import type { ReadingLayout } from './readings.ts';
import type { TableHeader } from './table-header.ts';

/**
 * The layout of pair measurements that a header stands for: headers of the form EMITTER>RECEIVER make it wide, a column
 * of files beside no frequency makes it a bench log; everything else is due to be long.
 */
export function layoutOf(header: TableHeader<ReadingColumn>): Exclude<ReadingLayout, 'take'> {
  const named = (name: ReadingColumn) => header.known.has(name);
  if (
    !(named('emitter') && named('receiver')) &&
    header.unknown.some((column) => pairOf(column.header) !== undefined)
  ) {
    return 'wide';
  }
  return named('file') && !named('frequency') ? 'bench log' : 'long';
}
