import { InputError } from '../quantity/input-fault.ts';
import { collectReadings, type ReadingCollector } from './collect-readings.ts';
import { type ColumnRule, meaningOf, READING_COLUMNS, type ReadingColumn } from './column-vocabulary.ts';
import { layoutOf } from './layout.ts';
import { compileLevelFormula, type LevelFormula } from './level-formula.ts';
import { LOG_EXAMPLE, type LogRow, readBenchLog } from './read-bench-log.ts';
import { LONG_EXAMPLE, readLong } from './read-long.ts';
import { readSpectrum, SPECTRUM_EXAMPLE, type ToldHeaders } from './read-spectrum.ts';
import { readTable } from './read-table.ts';
import { pairOf, readWide, WIDE_EXAMPLE } from './read-wide.ts';
import type { InputFile, ReadingLayout, ReadingOptions, Readings } from './readings.ts';
import type { Source } from './source.ts';
import { readHeader } from './table-header.ts';

/** What is the same for all files of a run. */
interface Reading {
  readonly collector: ReadingCollector;
  readonly formula: LevelFormula | undefined;
  readonly rules: readonly ColumnRule<ReadingColumn>[];
  readonly onBytes: (count: number) => void;
  /** More bytes to come than was known: files that a log names. */
  readonly expect: (bytes: number) => void;
}

const EXAMPLE = {
  long: LONG_EXAMPLE,
  wide: WIDE_EXAMPLE,
  'bench log': LOG_EXAMPLE,
  take: SPECTRUM_EXAMPLE,
} as const satisfies Record<ReadingLayout, string>;

/**
 * Reads pair measurements in any mix of layouts and dialects. Rows that cannot be used are kept in `unused` with their
 * reason. Files are read as streams; what stays is about 25 bytes a reading.
 * @throws InputError with the faults of all files together.
 */
export async function readFiles(sources: readonly Source[], options: ReadingOptions = {}): Promise<Readings> {
  const formula = options.levelFormula === undefined ? undefined : await compileLevelFormula(options.levelFormula);
  const collector = collectReadings();
  let done = 0;
  let total = 0;
  const reading: Reading = {
    collector,
    formula,
    // With a formula, a level column is a column like any other that the formula may name.
    rules: formula === undefined ? READING_COLUMNS : READING_COLUMNS.filter(({ name }) => name !== 'level'),
    onBytes: (count) => {
      done += count;
      options.onProgress?.(done, Math.max(done, total));
    },
    expect: (bytes) => {
      total += Number.isNaN(bytes) ? 0 : bytes;
    },
  };
  for (const source of sources) reading.expect(source.bytes);
  for (const source of sources) await collectFaults(collector, () => readSource(source, reading));
  saySameContent(collector);
  if (collector.faults.length > 0) throw new InputError(collector.faults);
  return collector.readings();
}

/** Faults of one file must not hide those of the next. */
async function collectFaults(collector: ReadingCollector, work: () => Promise<void>): Promise<void> {
  try {
    await work();
  } catch (trouble) {
    if (!(trouble instanceof InputError)) throw trouble;
    collector.faults.push(...trouble.faults);
  }
}

async function readSource(source: Source, reading: Reading): Promise<void> {
  const { collector, formula, rules, onBytes } = reading;
  const logged: LogRow[] = [];
  let layout: ReadingLayout = 'long';
  const before = usedSoFar(collector);
  const facts = await readTable(source, {
    knows: (header) => meaningOf(header, READING_COLUMNS) !== undefined || pairOf(header) !== undefined,
    example: LONG_EXAMPLE,
    onBytes,
    onNotice: collector.notice,
    header(fields, line) {
      const header = readHeader(source.name, fields, line, rules);
      layout = layoutOf(header);
      if (layout === 'wide') return readWide(header, formula, collector);
      if (layout === 'bench log') return readBenchLog(header, formula, collector, logged);
      return readLong(header, formula, collector);
    },
  });
  const { sha256, bytes, rows } = facts;
  collector.file({ name: source.name, layout, sha256, bytes, rows });
  if (logged.length === 0) refuseUseless(source.name, layout, before, collector);
  await readLogged(source, logged, reading);
}

async function readLogged(log: Source, rows: readonly LogRow[], reading: Reading): Promise<void> {
  const { collector, formula, rules, onBytes } = reading;
  const firstLine = new Map<string, number>();
  const told: ToldHeaders = new Map();
  let withoutHeader = 0;
  for (const row of rows) {
    const source = log.sibling(row.path);
    const earlier = firstLine.get(source.name);
    if (earlier !== undefined) {
      collector.faults.push({
        place: { file: log.name, line: row.line, column: 'file' },
        found: `\`${row.path}\` a second time (first in line ${earlier})`,
        expected: 'a file of its own for each take',
        remedy: 'Name the file that holds this take.',
      });
      continue;
    }
    firstLine.set(source.name, row.line);
    reading.expect(source.bytes);
    const before = usedSoFar(collector);
    await collectFaults(collector, async () => {
      const facts = await naming(log, row, () =>
        readSpectrum(source, row.take, rules, formula, collector, told, onBytes),
      );
      const { sha256, bytes, rows: count, hasHeader } = facts;
      collector.file({ name: source.name, layout: 'take', sha256, bytes, rows: count });
      if (!hasHeader) withoutHeader++;
      refuseUseless(source.name, 'take', before, collector);
    });
  }
  for (const { file, more } of told.values()) {
    if (more > 0)
      collector.notice(`${log.name}: ${more} more of the files that it names have the same header as ${file}.`);
  }
  if (withoutHeader > 0) {
    collector.notice(
      `${log.name}: ${withoutHeader} of the files that it names have no header; their columns are taken as frequency in Hz and level in dB.`,
    );
  }
}

/** A fault that has no line of its own, such as a file that is not there, is a fault of the log's row. */
async function naming<T>(log: Source, row: LogRow, work: () => Promise<T>): Promise<T> {
  try {
    return await work();
  } catch (trouble) {
    if (!(trouble instanceof InputError)) throw trouble;
    throw new InputError(
      trouble.faults.map((fault) => {
        if (fault.place.line !== undefined) return fault;
        const place = { file: log.name, line: row.line, column: 'file' };
        return { ...fault, place, found: `\`${fault.place.file}\`: ${fault.found}` };
      }),
    );
  }
}

function usedSoFar({ count, unusedRows, faults }: ReadingCollector) {
  return { count, unused: unusedRows.length, faults: faults.length };
}

/** A file in which nothing can be used stops the run, with the first row's reason and how often it comes. */
function refuseUseless(
  file: string,
  layout: ReadingLayout,
  before: ReturnType<typeof usedSoFar>,
  collector: ReadingCollector,
): void {
  const first = collector.unusedRows[before.unused];
  // A formula that failed everywhere has its own fault.
  if (collector.count > before.count || first === undefined || collector.faults.length > before.faults) return;
  const unused = collector.unusedRows.slice(before.unused);
  const same = unused.filter(({ reason }) => reason === first.reason).length;
  const value = first.value.trim() === '' ? '' : `\`${first.value}\`, `;
  collector.faults.push({
    place: first.column === '' ? { file, line: first.line } : { file, line: first.line, column: first.column },
    found: `${value}${first.reason}; the same in ${same} of ${unused.length} places, and nothing in the file that can be used`,
    expected: EXAMPLE[layout],
    remedy: 'Correct the rows, or leave the file out.',
  });
}

/**
 * The same file twice would count every reading twice and pass for a perfect repeat. Short spectra of a log may be equal
 * by chance, so there it is only said.
 */
function saySameContent(collector: ReadingCollector): void {
  const first = new Map<string, InputFile>();
  for (const file of collector.files) {
    const other = first.get(file.sha256);
    if (other === undefined) first.set(file.sha256, file);
    else if (file.layout === 'take') collector.notice(`${file.name} has the same content as ${other.name}.`);
    else {
      collector.faults.push({
        place: { file: file.name },
        found: other.name === file.name ? 'the same file a second time' : `the same content as in ${other.name}`,
        expected: 'each measurement once',
        remedy: 'Name one of the two.',
      });
    }
  }
}
