import { InputError, type InputFault } from '../quantity/input-fault.ts';
import type { ColumnRule } from '../readings/column-vocabulary.ts';
import { type EntryRow, readEntries } from '../readings/read-entries.ts';
import type { Source } from '../readings/source.ts';
import type { TableHeader } from '../readings/table-header.ts';
import { type Design, type PlannedSeating, pairKey, seatingOf, type UnitPair, unitsNamed } from './design.ts';

type DesignColumn =
  | 'emitter'
  | 'receiver'
  | 'seatings'
  | 'repeats'
  | 'emitterMount'
  | 'receiverMount'
  | 'path'
  | 'session'
  | 'minutes'
  | 'forbidden';

const COLUMNS: readonly ColumnRule<DesignColumn>[] = [
  { name: 'emitter', title: 'emitter', word: 'emitter' },
  { name: 'receiver', title: 'receiver', word: 'receiver' },
  { name: 'seatings', title: 'seatings', word: 'seatings' },
  { name: 'repeats', title: 'repeats', word: 'repeats' },
  { name: 'emitterMount', title: 'emitter_mount', word: 'emittermount' },
  { name: 'receiverMount', title: 'receiver_mount', word: 'receivermount' },
  { name: 'path', title: 'path', word: 'path' },
  { name: 'session', title: 'session', word: 'session' },
  { name: 'minutes', title: 'minutes', word: 'minutes' },
  { name: 'forbidden', title: 'forbidden', word: 'forbidden' },
];

const EXAMPLE =
  'a header line `emitter,receiver,seatings,repeats` and below it rows such as `S1,S2,1,2`: pairs that are to be taken';

const YES = ['yes', 'true', '1', 'x', 'forbidden'];
const NO = ['', 'no', 'false', '0'];
/** A pair mounted, or a seating taken, more often than this is a slip of the pen. Common practice, no source. */
const MOST_TIMES = 100;

export interface DesignDefaults {
  /** Where the table has no such column, or a blank. */
  readonly seatings: number;
  readonly repeats: number;
  /** The units that there are; absent where the table itself says so by naming them. */
  readonly units: readonly string[] | undefined;
}

/**
 * Reads a design: a row a pair, with how often it is mounted, how many takes each seating has, mounts, path, session,
 * minutes of a take, and whether the pair is forbidden.
 * @throws InputError with every fault of the file.
 */
export async function readDesign(
  source: Source,
  defaults: DesignDefaults,
): Promise<{ readonly design: Design; readonly notices: readonly string[] }> {
  const { entries, notices } = await readEntries(source, {
    rules: COLUMNS,
    required: ['emitter', 'receiver'],
    numeric: ['seatings', 'repeats', 'minutes'],
    decibels: [],
    example: EXAMPLE,
    // A design is a bench log of takes that are still to come.
    layout: 'bench log',
    checkHeader: readingsFaults,
    entry: (row) => entryOf(row, defaults),
  });
  const planned = entries.filter(({ isForbidden }) => !isForbidden);
  const forbidden = entries.filter(({ isForbidden }) => isForbidden);
  const faults = [
    ...contradictions(source.name, planned, forbidden),
    ...strangers(source.name, entries, defaults.units),
  ];
  if (faults.length > 0) throw new InputError(faults);
  const most = planned.reduce((sum, { seatings }) => Math.max(sum, seatings), 0);
  // Round by round, so that what is mounted again comes after the rest.
  const seatings = Array.from({ length: most }, (_, round) =>
    planned.filter((entry) => entry.seatings > round).map(({ seating }) => seating),
  ).flat();
  const design: Design = {
    name: source.name,
    units: defaults.units ?? unitsNamed(entries.map(({ seating }) => seating)),
    seatings,
    forbidden: forbidden.map(({ seating }): UnitPair => [seating.emitter, seating.receiver]),
  };
  return { design, notices };
}

interface DesignEntry {
  readonly line: number;
  readonly seating: PlannedSeating;
  readonly seatings: number;
  readonly isForbidden: boolean;
}

function entryOf(row: EntryRow<DesignColumn>, defaults: DesignDefaults): DesignEntry | undefined {
  for (const name of ['emitter', 'receiver'] as const) {
    if (row.text(name) === '') row.fault(name, 'a blank', 'the name of a unit', 'Name the unit.');
  }
  const word = row.text('forbidden').toLowerCase();
  if (!YES.includes(word) && !NO.includes(word)) {
    row.fault('forbidden', `\`${row.text('forbidden')}\``, 'yes, no or a blank', 'Correct the word.');
  }
  const seatings = timesOf(row, 'seatings', defaults.seatings);
  const repeats = timesOf(row, 'repeats', defaults.repeats);
  const minutes = row.number('minutes');
  if (minutes !== undefined && !(minutes >= 0)) {
    row.fault('minutes', `\`${row.text('minutes')}\``, 'minutes that a take lasts', 'Correct the number.');
  }
  const text = (name: DesignColumn) => row.text(name);
  return {
    line: row.line,
    seatings,
    isForbidden: YES.includes(word),
    seating: seatingOf(text('emitter'), text('receiver'), {
      emitterMount: text('emitterMount'),
      receiverMount: text('receiverMount'),
      path: text('path'),
      session: text('session'),
      repeats,
      minutes,
    }),
  };
}

function timesOf(row: EntryRow<DesignColumn>, name: 'seatings' | 'repeats', otherwise: number): number {
  const value = row.number(name);
  if (value === undefined) return otherwise;
  if (Number.isInteger(value) && value >= 1 && value <= MOST_TIMES) return value;
  row.fault(name, `\`${row.text(name)}\``, `a whole number from 1 to ${MOST_TIMES}`, 'Correct the number.');
  return otherwise;
}

/** A table with levels in it is a run, not a plan. */
function readingsFaults(header: TableHeader<DesignColumn>): InputFault[] {
  const found = header.unknown.find(({ header: name }) => /^(frequency|level|ratio)\b|^(frequency|level)_/i.test(name));
  if (found === undefined) return [];
  return [
    {
      place: { file: header.file, line: header.line, column: found.header },
      found: `the column \`${found.header}\`, as in a file of readings`,
      expected: EXAMPLE,
      remedy: 'Solve the readings first, and name the folder of the result with --from.',
    },
  ];
}

function contradictions(
  file: string,
  planned: readonly DesignEntry[],
  forbidden: readonly DesignEntry[],
): InputFault[] {
  const keys = new Map(forbidden.map(({ seating, line }) => [pairKey(seating.emitter, seating.receiver), line]));
  return planned.flatMap(({ seating, line }): InputFault[] => {
    const other = keys.get(pairKey(seating.emitter, seating.receiver));
    if (other === undefined) return [];
    return [
      {
        place: { file, line },
        found: `the pair ${seating.emitter} > ${seating.receiver}, which line ${other} forbids`,
        expected: 'each pair planned or forbidden, not both',
        remedy: 'Take one of the two rows out.',
      },
    ];
  });
}

function strangers(file: string, entries: readonly DesignEntry[], units: readonly string[] | undefined): InputFault[] {
  if (units === undefined) return [];
  return entries.flatMap(({ seating, line }) =>
    [seating.emitter, seating.receiver]
      .filter((unit) => !units.includes(unit))
      .map(
        (unit): InputFault => ({
          place: { file, line },
          found: `the unit ${unit}, which --units does not name`,
          expected: `one of ${units.slice(0, 12).join(', ')}${units.length > 12 ? ` and ${units.length - 12} more` : ''}`,
          remedy: 'Correct its spelling, or add it to --units.',
        }),
      ),
  );
}
