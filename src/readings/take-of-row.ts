import { ownText, type ReadingCollector } from './collect-readings.ts';
import type { ReadingColumn } from './column-vocabulary.ts';
import { isIsoTime } from './iso-time.ts';
import type { NumberReader } from './number-text.ts';
import { distanceTrouble } from './physical-limits.ts';
import type { Reject } from './reading-values.ts';
import type { TakeHeader } from './readings.ts';
import type { TableHeader } from './table-header.ts';

/** Columns that tell one take of a file from another. */
const IDENTITY = [
  'emitter',
  'receiver',
  'path',
  'session',
  'emitterMount',
  'receiverMount',
  'emitterSeating',
  'receiverSeating',
  'repeat',
] as const;

/** What a row notes of its take; `undefined` after `reject` where an emitter or a receiver has no name. */
export function takeHeaderOf(
  header: TableHeader<ReadingColumn>,
  fields: readonly string[],
  line: number,
  number: NumberReader,
  reject: Reject,
  notice: (text: string) => void,
): TakeHeader | undefined {
  const text = (name: ReadingColumn) => {
    const column = header.known.get(name);
    return column === undefined ? '' : ownText(fields[column.index]!.trim());
  };
  for (const name of ['emitter', 'receiver'] as const) {
    if (text(name) !== '') continue;
    reject(line, header.known.get(name)!.header, '', `no ${name} is named`);
    return undefined;
  }
  return {
    file: header.file,
    line,
    emitter: text('emitter'),
    receiver: text('receiver'),
    path: text('path'),
    session: text('session'),
    emitterMount: text('emitterMount'),
    receiverMount: text('receiverMount'),
    emitterSeating: text('emitterSeating'),
    receiverSeating: text('receiverSeating'),
    repeat: text('repeat'),
    takenAt: timeOf(text('takenAt'), header, line, notice),
    distance: distanceOf(header, fields, line, number, notice),
    note: text('note'),
  };
}

function timeOf(
  text: string,
  header: TableHeader<ReadingColumn>,
  line: number,
  notice: (text: string) => void,
): string {
  if (text === '' || isIsoTime(text)) return text;
  notice(`${header.file}:${line}: \`${text}\` is no ISO 8601 time such as 2026-05-04T10:30 and is not used.`);
  return '';
}

function distanceOf(
  header: TableHeader<ReadingColumn>,
  fields: readonly string[],
  line: number,
  number: NumberReader,
  notice: (text: string) => void,
): number | undefined {
  const column = header.known.get('distance');
  const text = column === undefined ? '' : fields[column.index]!;
  if (column === undefined || text.trim() === '') return undefined;
  const distance = number.read(text) * column.factor;
  const trouble = distanceTrouble(distance);
  if (trouble === '') return distance;
  notice(`${header.file}:${line}: the distance \`${text.trim()}\` is ${trouble} and is not used.`);
  return undefined;
}

/** Remarks of one kind that are printed; the rest are counted. */
const REMARKS_SHOWN = 3;

/** Says the first few remarks on the takes of a file and, at the end, how many more there were. */
export function fewRemarks(
  file: string,
  collector: Pick<ReadingCollector, 'notice'>,
): { say(text: string): void; end(): void } {
  let count = 0;
  return {
    say(text) {
      count++;
      if (count <= REMARKS_SHOWN) collector.notice(text);
    },
    end() {
      if (count > REMARKS_SHOWN) {
        collector.notice(`${file}: ${count - REMARKS_SHOWN} more times or distances could not be used either.`);
      }
    },
  };
}

/**
 * Finds the take of each row of a file and makes it where it is new. The row before mostly belongs to the same take, so
 * its fields are compared before any key is built.
 */
export function takeOfRow(
  header: TableHeader<ReadingColumn>,
  number: NumberReader,
  collector: ReadingCollector,
  reject: Reject,
): { find(fields: readonly string[], line: number): number | undefined; end(): void } {
  const identity = IDENTITY.flatMap((name) => header.known.get(name)?.index ?? []);
  const distanceAt = header.known.get('distance')?.index;
  const known = new Map<string, number>();
  const last: string[] = [];
  let lastTake: number | undefined;
  const distanceText = new Map<number, string>();
  const otherDistances = new Set<number>();
  const remarks = fewRemarks(header.file, collector);

  const lookUp = (fields: readonly string[], line: number): number | undefined => {
    const key = identity.map((index) => fields[index]!.trim()).join('\0');
    const found = known.get(key);
    if (found !== undefined) return found;
    const fresh = takeHeaderOf(header, fields, line, number, reject, remarks.say);
    if (fresh === undefined) return undefined;
    const take = collector.take(fresh);
    known.set(key, take);
    if (distanceAt !== undefined) distanceText.set(take, ownText(fields[distanceAt]!));
    return take;
  };

  return {
    find(fields, line) {
      let same = lastTake !== undefined;
      for (let i = 0; same && i < identity.length; i++) same = fields[identity[i]!] === last[i];
      if (!same) {
        lastTake = lookUp(fields, line);
        for (let i = 0; i < identity.length; i++) last[i] = fields[identity[i]!]!;
      }
      if (lastTake !== undefined && distanceAt !== undefined && fields[distanceAt] !== distanceText.get(lastTake)) {
        otherDistances.add(lastTake);
      }
      return lastTake;
    },
    end() {
      remarks.end();
      if (otherDistances.size === 0) return;
      collector.notice(
        `${header.file}: ${otherDistances.size} takes have more than one distance; the first of each is used.`,
      );
    },
  };
}
