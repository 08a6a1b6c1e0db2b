import { rm, writeFile } from 'node:fs/promises';
import { InputError } from '../quantity/input-fault.ts';
import type { OutputFile } from '../report/result.ts';
import { systemFault } from './system-fault.ts';

/**
 * Writes files where none of these names is yet, all of them or none.
 * @throws InputError where a name is taken, or a file cannot be written.
 */
export async function writeNewFiles(files: readonly OutputFile[]): Promise<void> {
  const written: string[] = [];
  try {
    for (const { name, chunks } of files) {
      try {
        await writeFile(name, chunks(), { flag: 'wx' });
      } catch (error) {
        throw faultOf(name, error);
      }
      written.push(name);
    }
  } catch (error) {
    await Promise.all(written.map((name) => rm(name, { force: true })));
    throw error;
  }
}

function faultOf(name: string, error: unknown): unknown {
  const expected = 'a name that is not taken, in a folder that can be written';
  if ((error as { code?: unknown } | undefined)?.code === 'EEXIST') {
    const remedy = 'It may be filled in already, and is left as it is: choose another name.';
    return new InputError([{ place: { file: name }, found: 'a file of that name', expected, remedy }]);
  }
  return systemFault(name, error, { expected, remedy: 'Nothing was written. Choose another place.' });
}
