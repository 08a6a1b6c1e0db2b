/** A file to read, wherever its bytes come from: a disk, an upload, a test. */
export interface Source {
  /** As the user typed it; every message names the file so. */
  readonly name: string;
  /** Length in bytes; NaN where it is not known beforehand (a pipe). */
  readonly bytes: number;
  /** The bytes in order, in pieces of any size. Iterating rejects with an InputError where the file cannot be opened. */
  open(): AsyncIterable<Uint8Array>;
  /** The file that this one names by a relative path, as a bench log does. */
  sibling(path: string): Source;
}
