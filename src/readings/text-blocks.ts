import { createHash } from 'node:crypto';
import { InputError } from '../quantity/input-fault.ts';
import type { Source } from './source.ts';

/** What went by while a file was read. */
export interface FileDigest {
  readonly sha256: string;
  readonly bytes: number;
}

/** Longest line that is still taken for text, in bytes: 16 MiB, a wide table of a million columns. */
const LONGEST_LINE = 2 ** 24;
const LINE_FEED = 10;
const CARRIAGE_RETURN = 13;

/**
 * Text of a file in blocks of whole lines, the byte-order mark taken away; only the last block may lack its line end.
 * The generator returns the file's digest.
 * @param onBytes called with the length of each piece.
 * @throws InputError where the file is no UTF-8 text, or is not as long at the end as it was at the start.
 */
export async function* textBlocks(
  source: Source,
  onBytes: (count: number) => void,
): AsyncGenerator<string, FileDigest, undefined> {
  const hash = createHash('sha256');
  let bytes = 0;
  let pending = new Uint8Array(0);
  for await (const chunk of source.open()) {
    hash.update(chunk);
    const block = pending.length === 0 ? chunk : joined(pending, chunk);
    refuseOtherThanText(source.name, block, bytes === 0 || bytes === pending.length);
    bytes += chunk.length;
    onBytes(chunk.length);
    const cut = endOfLastLine(block);
    if (cut > 0) yield await decoded(source, block.subarray(0, cut), bytes - block.length);
    // A copy, since the source may use its buffer again.
    pending = block.slice(cut);
    if (pending.length > LONGEST_LINE) throw notText(source.name, 'a line of more than 16 MiB');
  }
  if (pending.length > 0) yield await decoded(source, pending, bytes - pending.length);
  if (!Number.isNaN(source.bytes) && bytes !== source.bytes) {
    throw new InputError([
      {
        place: { file: source.name },
        found: `${bytes} bytes where the file had ${source.bytes} when it was opened`,
        expected: 'a file that stays as it is while it is read',
        remedy: 'Wait until whatever writes the file has finished, then run again.',
      },
    ]);
  }
  return { sha256: hash.digest('hex'), bytes };
}

function joined(first: Uint8Array, second: Uint8Array): Uint8Array {
  const all = new Uint8Array(first.length + second.length);
  all.set(first);
  all.set(second, first.length);
  return all;
}

/** Where the last whole line ends. A file with carriage returns alone is cut after one that no line feed can follow. */
function endOfLastLine(block: Uint8Array): number {
  const feed = block.lastIndexOf(LINE_FEED);
  if (feed >= 0) return feed + 1;
  return block.subarray(0, -1).lastIndexOf(CARRIAGE_RETURN) + 1;
}

/** First bytes of files that people hand over in place of text, and what they are. */
const SIGNATURES: readonly (readonly [readonly number[], string])[] = [
  [[0xff, 0xfe], 'UTF-16 text'],
  [[0xfe, 0xff], 'UTF-16 text'],
  [[0x50, 0x4b, 0x03, 0x04], 'a zip archive or a spreadsheet'],
  [[0x1f, 0x8b], 'a gzip archive'],
  [[0x25, 0x50, 0x44, 0x46], 'a PDF document'],
];

function refuseOtherThanText(file: string, block: Uint8Array, first: boolean): void {
  if (first) {
    const known = SIGNATURES.find(([signature]) => signature.every((byte, at) => block[at] === byte));
    if (known !== undefined) throw notText(file, known[1]);
  }
  if (block.includes(0)) throw notText(file, 'binary data or UTF-16 text (it holds a zero byte)');
}

function notText(file: string, found: string, line?: number): InputError {
  return new InputError([
    {
      place: line === undefined ? { file } : { file, line },
      found,
      expected: 'a CSV file in UTF-8 text',
      remedy: 'Save or export it as CSV with the encoding UTF-8.',
    },
  ]);
}

const UTF8 = new TextDecoder('utf-8', { fatal: true });

async function decoded(source: Source, block: Uint8Array, start: number): Promise<string> {
  try {
    return UTF8.decode(block);
  } catch {
    throw notText(source.name, 'a byte that is no UTF-8', (await linesBefore(source, start)) + badLine(block));
  }
}

/** Lines are not counted on the way, since only a fault asks for them: the file is read again up to `offset`. */
async function linesBefore(source: Source, offset: number): Promise<number> {
  let lines = 0;
  let at = 0;
  for await (const chunk of source.open()) {
    for (let i = 0; i < chunk.length && at < offset; i++, at++) if (chunk[i] === LINE_FEED) lines++;
    if (at >= offset) break;
  }
  return lines;
}

/** Counted from 1. */
function badLine(block: Uint8Array): number {
  for (let line = 1, from = 0; ; line++) {
    const feed = block.indexOf(LINE_FEED, from);
    try {
      UTF8.decode(block.subarray(from, feed < 0 ? block.length : feed));
    } catch {
      return line;
    }
    if (feed < 0) return line;
    from = feed + 1;
  }
}
