import { InputError } from '../quantity/input-fault.ts';

/** What the operating system's refusals mean to a reader. Source: POSIX.1, errors of open, write, mkdir and rename. */
const REFUSALS: Readonly<Record<string, string>> = {
  EACCES: 'no permission',
  EPERM: 'no permission',
  EROFS: 'a disk that is read-only',
  ENOSPC: 'no space left on the disk',
  EDQUOT: 'no space left in the disk quota',
  EFBIG: 'a limit on the size of files that is too small for the result',
  ENOENT: 'nothing of that name',
  ENOTDIR: 'a file where a folder is due on the way to it',
  EISDIR: 'a folder',
  ENAMETOOLONG: 'a name that is too long',
  ELOOP: 'symbolic links that lead in a circle',
  EBUSY: 'a place that is in use',
  EMFILE: 'too many open files',
  ENFILE: 'too many open files',
  EIO: 'a disk that does not answer as it should',
};

/**
 * A refusal of the operating system as an input fault of the place that the user named.
 * @returns the error itself where it is no refusal of the system: then it is a defect.
 */
export function systemFault(
  name: string,
  error: unknown,
  { expected, remedy }: { readonly expected: string; readonly remedy: string },
): unknown {
  const code = error instanceof Error && 'code' in error && 'syscall' in error ? String(error.code) : undefined;
  if (code === undefined) return error;
  const found = REFUSALS[code] ?? (error as Error).message;
  return new InputError([{ place: { file: name }, found, expected, remedy }]);
}
