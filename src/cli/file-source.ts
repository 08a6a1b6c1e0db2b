import { createReadStream, statSync } from 'node:fs';
import { stat } from 'node:fs/promises';
import { dirname, isAbsolute, join } from 'node:path';
import { InputError } from '../quantity/input-fault.ts';
import type { Source } from '../readings/source.ts';

/** Bytes that are read at a time. Larger pieces gained nothing on 77 MB. */
const PIECE = 2 ** 18;

/**
 * A file on disk, or a pipe.
 * @throws InputError where there is no such file, it is a folder, or it may not be read.
 */
export async function fileSource(path: string): Promise<Source> {
  try {
    const facts = await stat(path);
    if (facts.isDirectory()) throw faultOf(path, 'a folder', AS_TYPED);
    return sourceOf(path, facts.isFile() ? facts.size : Number.NaN, AS_TYPED);
  } catch (trouble) {
    throw inputErrorOf(path, trouble, AS_TYPED);
  }
}

function sourceOf(name: string, bytes: number, remedy: string): Source {
  return { name, bytes, open: () => piecesOf(name, remedy), sibling: (path) => siblingOf(name, path) };
}

/** Where nothing is there to measure, opening will tell. A log written on another system may use `\` in its paths. */
function siblingOf(name: string, path: string): Source {
  const beside = (relative: string) => (isAbsolute(relative) ? relative : join(dirname(name), relative));
  for (const candidate of [beside(path), beside(path.replaceAll('\\', '/'))]) {
    const facts = statSync(candidate, { throwIfNoEntry: false });
    if (facts !== undefined) return sourceOf(candidate, facts.isFile() ? facts.size : Number.NaN, AS_LOGGED);
  }
  return sourceOf(beside(path), Number.NaN, AS_LOGGED);
}

async function* piecesOf(name: string, remedy: string): AsyncGenerator<Uint8Array> {
  try {
    yield* createReadStream(name, { highWaterMark: PIECE });
  } catch (trouble) {
    throw inputErrorOf(name, trouble, remedy);
  }
}

const AS_TYPED = 'Check the path, as seen from the folder in which the program was started.';
const AS_LOGGED = 'Check the path, as seen from the folder of the file that names it.';

const FOUND: ReadonlyMap<string, string> = new Map([
  ['ENOENT', 'no such file'],
  ['ENOTDIR', 'no such file'],
  ['EISDIR', 'a folder'],
  ['EACCES', 'a file that may not be read'],
  ['EPERM', 'a file that may not be read'],
]);

/** Anything but trouble with the file itself is passed on as it is. */
function inputErrorOf(name: string, trouble: unknown, remedy: string): unknown {
  const code = (trouble as { code?: unknown } | undefined)?.code;
  if (typeof code !== 'string') return trouble;
  return faultOf(name, FOUND.get(code) ?? `a file that cannot be read (${code})`, remedy);
}

function faultOf(name: string, found: string, remedy: string): InputError {
  return new InputError([
    {
      place: { file: name },
      found,
      expected: 'a file that can be read',
      remedy,
    },
  ]);
}
