import { InputError } from '../quantity/input-fault.ts';
import { decimalMarkOf, type NumberColumns, type NumberReader, numberReader } from './number-text.ts';
import { recordReader } from './records.ts';
import { type Separator, sniffSeparator } from './separator.ts';
import type { Source } from './source.ts';
import { textBlocks } from './text-blocks.ts';

/** How the rows below a header are to be read. The decimal mark is found in the columns that hold numbers. */
export interface TablePlan extends NumberColumns {
  /** Called before the first row, with the reader of this file's numbers. */
  start(number: NumberReader): RowSink;
}

interface RowSink {
  /** A row with a field for every header. */
  row(fields: string[], line: number): void;
  /** A row that cannot be used because of its shape. */
  reject(line: number, value: string, reason: string): void;
  /** Called after the last row. */
  end?(): void;
}

export interface TableKind {
  /** Whether a header means something here. */
  readonly knows: (header: string) => boolean;
  /** The right form, for messages. */
  readonly example: string;
  /** Called with the header's fields. */
  readonly header: (fields: string[], line: number) => TablePlan;
  readonly onBytes: (count: number) => void;
  readonly onNotice: (notice: string) => void;
}

export interface TableFacts {
  readonly sha256: string;
  readonly bytes: number;
  /** Data rows, used or not. */
  readonly rows: number;
  readonly headerLine: number;
}

/** Rows that are looked at before the decimal mark is decided; ten times as many, and again, where they do not tell. */
const SAMPLE_ROWS = 50;
const MOST_SAMPLE_ROWS = 5000;

/**
 * Reads a table with a header line, row by row.
 * @throws InputError for a file that is empty, holds a header only, ends in the middle of a row, or is no text; and
 * whatever `header` throws.
 */
export async function readTable(source: Source, kind: TableKind): Promise<TableFacts> {
  let separator: Separator = ',';
  let headers = 0;
  let headerLine = 0;
  /** Headers up to the last that is not blank: a spreadsheet may leave out the blanks behind it. */
  let named = 0;
  let plan: TablePlan | undefined;
  let sink: RowSink | undefined;
  let sample: { fields: string[]; line: number }[] = [];
  let sampleRows = SAMPLE_ROWS;
  let rows = 0;
  let outcommented = 0;
  let firstOutcommented = 0;

  const takeRow = (to: RowSink, fields: string[], line: number) => {
    const count = fields.length;
    if (count === headers || (count >= named && onlyBlanksFrom(fields, Math.min(headers, count)))) to.row(fields, line);
    else to.reject(line, fields.join(separator).slice(0, 200), lengthReason(count, headers, separator));
  };
  const sampledMark = () =>
    decimalMarkOf(
      sample.map(({ fields }) => fields),
      plan!,
    );
  const begin = (mark = sampledMark().mark): RowSink => {
    const started = plan!.start(numberReader(mark));
    sink = started;
    for (const { fields, line } of sample) takeRow(started, fields, line);
    sample = [];
    return started;
  };
  const records = recordReader(source.name, {
    separator: (firstLine) => {
      separator = sniffSeparator(firstLine, kind.knows);
      return separator;
    },
    comment: (text, line) => {
      if (plan === undefined || text.split(separator).length !== headers || headers < 2) return;
      outcommented++;
      if (outcommented === 1) firstOutcommented = line;
    },
    record: (fields, line, ended) => {
      if (plan === undefined) {
        headers = fields.length;
        headerLine = line;
        named = fields.findLastIndex((field) => field.trim() !== '') + 1;
        plan = kind.header(fields, line);
        return;
      }
      if (!ended && fields.length < named) throw endsInside(source.name, line, fields.length, headers);
      rows++;
      if (sink !== undefined) takeRow(sink, fields, line);
      else {
        sample.push({ fields, line });
        if (sample.length < sampleRows) return;
        const { mark, isAmbiguous } = sampledMark();
        if (isAmbiguous && sampleRows < MOST_SAMPLE_ROWS) sampleRows *= 10;
        else begin(mark);
      }
    },
  });

  const blocks = textBlocks(source, kind.onBytes);
  let step = await blocks.next();
  for (; !step.done; step = await blocks.next()) records.push(step.value);
  records.finish();
  if (plan === undefined) throw nothing(source.name, undefined, 'an empty file', kind.example);
  if (rows === 0) throw nothing(source.name, headerLine, 'a header line and no row below it', kind.example);
  (sink ?? begin()).end?.();
  if (outcommented > 0) {
    kind.onNotice(
      `${source.name}: ${outcommented} lines that start with # have as many fields as the table (the first is line ${firstOutcommented}) and were passed over as comments; put a name that starts with # in double quotes.`,
    );
  }
  return { ...step.value, rows, headerLine };
}

function onlyBlanksFrom(fields: readonly string[], from: number): boolean {
  for (let i = from; i < fields.length; i++) if (fields[i]!.trim() !== '') return false;
  return true;
}

export function lengthReason(count: number, headers: number, separator: Separator): string {
  const counts = `${count} fields where the header has ${headers}`;
  if (count < headers || separator !== ',') return counts;
  return `${counts}; the likely cause is a decimal comma in a file whose separator is the comma: write decimal points, or separate by semicolons`;
}

function endsInside(file: string, line: number, count: number, headers: number): InputError {
  return new InputError([
    {
      place: { file, line },
      found: `the end of the file in the middle of a row, after ${count} of ${headers} fields`,
      expected: 'a file that is complete',
      remedy: 'Copy or export the file again; if the row is meant so, end it with a line break.',
    },
  ]);
}

function nothing(file: string, line: number | undefined, found: string, example: string): InputError {
  return new InputError([
    {
      place: line === undefined ? { file } : { file, line },
      found,
      expected: example,
      remedy: 'Give the file that holds the numbers, or leave this one out.',
    },
  ]);
}
