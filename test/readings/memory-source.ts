import { InputError } from '../../src/quantity/input-fault.ts';
import type { Source } from '../../src/readings/source.ts';

export type Content = string | Uint8Array;

/** A file that exists in memory only, with the files beside it by name. */
export function memorySource(
  name: string,
  content: Content | undefined,
  beside: Readonly<Record<string, Content>> = {},
  piece = 1000,
): Source {
  const bytes = typeof content === 'string' ? new TextEncoder().encode(content) : content;
  return {
    name,
    bytes: bytes?.length ?? Number.NaN,
    async *open() {
      if (bytes === undefined) {
        throw new InputError([
          { place: { file: name }, found: 'no such file', expected: 'a file', remedy: 'Check it.' },
        ]);
      }
      for (let from = 0; from < bytes.length; from += piece) yield bytes.subarray(from, from + piece);
    },
    sibling: (path) => memorySource(path, beside[path], beside, piece),
  };
}

/** The faults that something ends with; fails where it ends without any. */
export async function faultsOf(work: Promise<unknown>) {
  try {
    await work;
  } catch (trouble) {
    if (trouble instanceof InputError) return trouble.faults;
    throw trouble;
  }
  throw new Error('no fault');
}
