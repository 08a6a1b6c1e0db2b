import { InputError, type InputFault } from '../quantity/input-fault.ts';
import { ownText, type ReadingCollector, type ReadingValues } from './collect-readings.ts';
import { headerParts, type ReadingColumn } from './column-vocabulary.ts';
import { type LevelFormula, requireColumns } from './level-formula.ts';
import { levelTrouble } from './physical-limits.ts';
import { rejectInto } from './read-long.ts';
import type { TablePlan } from './read-table.ts';
import { columnFrequency, columnLevel } from './reading-values.ts';
import { type KnownColumn, type TableHeader, unknownNotice } from './table-header.ts';

/** The right form, for messages. */
export const WIDE_EXAMPLE =
  'a header line `frequency_hz,T01>T02,T01>T03,T01>T03#2` and below it rows such as `20000,-41.3,-40.8,-40.9`';

/** A header `EMITTER>RECEIVER`, with `#2` and so on for further takes of the pair. */
export interface PairHeader {
  readonly emitter: string;
  readonly receiver: string;
  /** Empty for a pair without a number. */
  readonly repeat: string;
}

/**
 * The pair that a header of the wide layout names; undefined where it names none. A unit in brackets behind it (`[dB]`)
 * is taken off. Only a last `#` with digits is a repeat, so that `A>S#1#2` is the second take of the unit `S#1`.
 */
export function pairOf(header: string): PairHeader | undefined {
  const bare = header.trim().replace(/\s*[[({]\s*dB[^\])}]*[\])}]$/i, '');
  const match = /^([^>]*)>([^>]*?)(?:#(\d+))?$/.exec(bare);
  if (match === null) return undefined;
  return { emitter: match[1]!.trim(), receiver: match[2]!.trim(), repeat: match[3] ?? '' };
}

/**
 * Reads a table with a frequency in the first column and the levels of a take in each further one.
 * @param formula may name the frequency's column and `level_db`, which is the cell.
 * @throws InputError for a header that cannot be used.
 */
export function readWide(
  header: TableHeader<ReadingColumn>,
  formula: LevelFormula | undefined,
  collector: ReadingCollector,
): TablePlan {
  const pairs = header.unknown.flatMap(({ index, header: text }) => {
    const pair = pairOf(text);
    return pair === undefined ? [] : [{ index, text, pair }];
  });
  const faults = [...header.faults, ...frequencyFaults(header), ...pairFaults(header, pairs)];
  if (faults.length > 0) throw new InputError(faults);
  const frequency = header.known.get('frequency')!;
  if (formula !== undefined) requireColumns(formula, header, ['frequency_hz', 'level_db']);
  header.notices.forEach(collector.notice);
  const unknown = unknownNotice(
    header,
    pairs.map(({ index }) => index),
    (name) => name !== 'frequency',
  );
  if (unknown !== undefined) collector.notice(unknown);
  const reject = rejectInto(collector, header.file);
  return {
    numeric: [frequency.index, ...pairs.map(({ index }) => index)],
    // With a formula, a cell may hold anything.
    decibels: formula === undefined ? pairs.map(({ index }) => index) : [],
    start(number) {
      const columns = pairs.map(({ index, text, pair }) => ({
        column: { index, header: ownText(text), factor: 1, linear: false } satisfies KnownColumn,
        pair,
        take: undefined as number | undefined,
      }));
      const values = { ...NOTHING };
      const inputs = new Float64Array(formula?.names.length ?? 0);
      const failures: { line: number; column: string }[] = [];
      return {
        row(fields, line) {
          values.frequency = columnFrequency(frequency, fields[frequency.index]!, number, line, reject);
          if (Number.isNaN(values.frequency)) return;
          for (const entry of columns) {
            values.level = columnLevel(
              entry.column,
              fields[entry.column.index]!,
              number,
              line,
              reject,
              formula !== undefined,
            );
            if (Number.isNaN(values.level)) continue;
            if (formula !== undefined) {
              formula.names.forEach((name, i) => {
                inputs[i] = name === 'level_db' ? values.level : values.frequency;
              });
              values.level = formula.level(inputs);
              if (!Number.isFinite(values.level)) {
                failures.push({ line, column: entry.column.header });
                continue;
              }
              const trouble = levelTrouble(values.level);
              if (trouble !== '') {
                reject(line, entry.column.header, `${values.level}`, `the formula makes this of the cell: ${trouble}`);
                continue;
              }
            }
            entry.take ??= collector.take(takeHeader(header, entry.pair));
            collector.reading(entry.take, line, values);
          }
        },
        reject: (line, value, reason) => reject(line, '', value, reason),
        end() {
          const empty = columns.filter(({ take }) => take === undefined).map(({ column }) => `\`${column.header}\``);
          if (empty.length > 0 && empty.length < columns.length) {
            collector.notice(`${header.file}: nothing was measured in the columns ${empty.join(', ')}.`);
          }
          const first = failures[0];
          if (first === undefined || formula === undefined) return;
          collector.faults.push({
            place: { file: header.file, ...first },
            found: `no finite level from the formula \`${formula.text}\` in ${failures.length} cells, the first here`,
            expected: 'a formula that gives a finite level in dB for every cell',
            remedy: 'Correct the formula or the numbers; leave a cell blank where nothing was measured.',
          });
        },
      };
    },
  };
}

const NOTHING: ReadingValues = {
  frequency: 0,
  level: 0,
  uncertainty: Number.NaN,
  averages: Number.NaN,
  coherence: Number.NaN,
  noise: Number.NaN,
};

function takeHeader(header: TableHeader<ReadingColumn>, pair: PairHeader) {
  return {
    file: header.file,
    line: header.line,
    ...pair,
    path: '',
    session: '',
    emitterMount: '',
    receiverMount: '',
    emitterSeating: '',
    receiverSeating: '',
    takenAt: '',
    distance: undefined,
    note: '',
  };
}

function frequencyFaults(header: TableHeader<ReadingColumn>): InputFault[] {
  const column = header.known.get('frequency');
  if (column?.index === 0) return [];
  const first = header.headers[0] ?? '';
  return [
    {
      place: { file: header.file, line: header.line, column: first },
      found: `\`${first}\` as the first column beside headers of the form EMITTER>RECEIVER`,
      expected: `a frequency with its unit in the first column, as in ${WIDE_EXAMPLE}`,
      remedy:
        headerParts(first).word === 'frequency'
          ? 'Name its unit: Hz, kHz or MHz.'
          : 'Put the frequency first and name it `frequency_hz`, `frequency_khz` or `frequency_mhz`.',
    },
  ];
}

interface PairColumn {
  readonly index: number;
  readonly text: string;
  readonly pair: PairHeader;
}

function pairFaults(header: TableHeader<ReadingColumn>, pairs: readonly PairColumn[]): InputFault[] {
  const faults: InputFault[] = [];
  const seen = new Map<string, string>();
  const emitters = new Set(pairs.map(({ pair }) => pair.emitter));
  for (const { text, pair } of pairs) {
    const place = { file: header.file, line: header.line, column: text };
    if (pair.emitter === '' || pair.receiver === '') {
      faults.push({
        place,
        found: `\`${text}\`, a pair without ${pair.emitter === '' ? 'an emitter' : 'a receiver'}`,
        expected: `EMITTER>RECEIVER, as in ${WIDE_EXAMPLE}`,
        remedy: 'Name both units of the pair.',
      });
      continue;
    }
    if (pair.repeat !== '' && emitters.has(`${pair.receiver}#${pair.repeat}`)) {
      faults.push({
        place,
        found: `\`${text}\`, which is take ${pair.repeat} with ${pair.receiver} or a take with the unit ${pair.receiver}#${pair.repeat}`,
        expected: 'a header with one meaning',
        remedy: `Write \`${text}#1\` if the unit is meant; rename the unit if the repeat is.`,
      });
    }
    const key = JSON.stringify([pair.emitter, pair.receiver, pair.repeat]);
    const before = seen.get(key);
    if (before !== undefined) {
      faults.push({
        place,
        found: `two columns for the same take, \`${before}\` and \`${text}\``,
        expected: `a number behind each further take of a pair, as in ${WIDE_EXAMPLE}`,
        remedy: `Write \`${pair.emitter}>${pair.receiver}#2\` if it was taken again; if not, remove one of the two.`,
      });
    } else seen.set(key, text);
  }
  return faults;
}
