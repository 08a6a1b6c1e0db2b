import { randomBytes } from 'node:crypto';
import { renameSync, rmdirSync, rmSync, statSync } from 'node:fs';
import { chmod, mkdir, open, realpath, rmdir, writeFile } from 'node:fs/promises';
import { dirname, join } from 'node:path';
import type { OutputFile } from '../report/result.ts';
import { EXIT_BY_SIGNAL } from './exit-codes.ts';
import { EXPECTED_PLACE, refuseInputsInside, refuseOccupied, targetOf } from './output-place.ts';
import { systemFault } from './system-fault.ts';

/** Characters gathered before they are written: fewer calls, and still little memory. */
const BLOCK = 1 << 16;

/** A folder that will hold all of the files, or none. */
export interface OutputFolder {
  /** Writes beside the folder and then puts the whole in its place. `onFile` hears the name of each file begun. */
  readonly write: (files: Iterable<OutputFile>, onFile?: (name: string) => void) => Promise<void>;
}

export interface OutputFolderOptions {
  /** Whether a folder that holds an earlier result, and nothing else, may be replaced. */
  readonly replaceResult: boolean;
  /** Files that the run reads; none may lie in the folder. */
  readonly inputs: readonly string[];
  /** Writes one file; another one stands in for a failing disk in tests. */
  readonly writeFile?: (path: string, text: Iterable<string>) => Promise<void>;
}

/**
 * Makes sure, before any work is done, that the folder can be written: it is new, empty, or an earlier result, and its
 * parent takes a new folder. Nothing is there until `write`; an earlier result stands until the new one is complete.
 * @throws InputError where it cannot be written, and from `write` where writing fails (no space, for example).
 */
export async function openOutputFolder(name: string, options: OutputFolderOptions): Promise<OutputFolder> {
  const target = await withFaults(name, () => targetOf(name));
  refuseInputsInside(
    name,
    target,
    await Promise.all(options.inputs.map((input) => realpath(input).catch(() => input))),
  );
  await withFaults(name, async () => {
    refuseOccupied(name, target, options.replaceResult);
    const probe = await temporaryBeside(target);
    await rmdir(probe);
  });
  const writeOne = options.writeFile ?? writeWhole;
  return {
    write: (files, onFile) =>
      withFaults(name, async () => {
        const temporary = await temporaryBeside(target);
        const leftOver = [temporary];
        const release = removeOnSignal(leftOver);
        try {
          for (const file of files) {
            onFile?.(file.name);
            const path = join(temporary, file.name);
            if (dirname(file.name) !== '.') await mkdir(dirname(path), { recursive: true });
            await writeOne(path, inBlocks(file.chunks()));
          }
          const mode = statSync(target, { throwIfNoEntry: false })?.mode;
          if (mode !== undefined) await chmod(temporary, mode & 0o7777);
          const earlier = putInPlace(name, temporary, target, options.replaceResult);
          if (earlier !== undefined) leftOver.push(earlier);
        } finally {
          // What is left is either the unfinished new folder or the earlier result that it has replaced.
          for (const folder of leftOver) rmSync(folder, { recursive: true, force: true });
          release();
        }
      }),
  };
}

function temporaryBeside(target: string): Promise<string> {
  const path = join(dirname(target), `.oddloop-${randomBytes(6).toString('hex')}`);
  return mkdir(path).then(() => path);
}

// Synchronous, so that neither a signal nor other work of ours comes between the last look and the two renames.
function putInPlace(name: string, temporary: string, target: string, replaceResult: boolean): string | undefined {
  const there = refuseOccupied(name, target, replaceResult);
  if (there === 'empty') rmdirSync(target);
  if (there !== 'result') {
    renameSync(temporary, target);
    return undefined;
  }
  const earlier = `${temporary}-earlier`;
  renameSync(target, earlier);
  try {
    renameSync(temporary, target);
  } catch (error) {
    renameSync(earlier, target);
    throw error;
  }
  return earlier;
}

async function writeWhole(path: string, text: Iterable<string>): Promise<void> {
  const file = await open(path, 'wx');
  try {
    await writeFile(file, text);
    // Some disks tell only now that they are full, and the earlier result must not go before the new one is safe.
    await file.sync();
  } finally {
    await file.close();
  }
}

function* inBlocks(chunks: Iterable<string>): Iterable<string> {
  let block = '';
  for (const chunk of chunks) {
    block += chunk;
    if (block.length < BLOCK) continue;
    yield block;
    block = '';
  }
  if (block !== '') yield block;
}

function removeOnSignal(leftOver: readonly string[]): () => void {
  const listeners = Object.entries(EXIT_BY_SIGNAL).map(([signal, code]) => {
    const end = () => {
      for (const folder of leftOver) rmSync(folder, { recursive: true, force: true });
      process.exit(code);
    };
    process.once(signal, end);
    return () => process.off(signal, end);
  });
  return () => {
    for (const remove of listeners) remove();
  };
}

async function withFaults<Value>(name: string, act: () => Promise<Value>): Promise<Value> {
  try {
    return await act();
  } catch (error) {
    throw systemFault(name, error, {
      expected: EXPECTED_PLACE,
      remedy: 'Nothing was written. Make room, or choose another place.',
    });
  }
}
