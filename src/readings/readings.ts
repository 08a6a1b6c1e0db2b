/** What the user's files say of one take: its identity and what was noted with it. An empty string means 'not given'. */
export interface TakeHeader {
  /** File that holds the readings, as the user named it (bench log: the named file, with the log's folder before it). */
  readonly file: string;
  /** Line of the take's first reading in `file` (wide: the header line). */
  readonly line: number;
  readonly emitter: string;
  readonly receiver: string;
  readonly path: string;
  readonly session: string;
  readonly emitterMount: string;
  readonly receiverMount: string;
  readonly emitterSeating: string;
  readonly receiverSeating: string;
  readonly repeat: string;
  /** ISO 8601, as given. */
  readonly takenAt: string;
  /** Metres; undefined where not given. */
  readonly distance: number | undefined;
  readonly note: string;
}

/** A row, or one value of it, that could not be used; written to `unused.csv`. */
export interface UnusedRow {
  readonly file: string;
  readonly line: number;
  /** The column's header as the user wrote it; empty where the row as a whole is meant. */
  readonly column: string;
  /** What stood there, as it was written; of a whole row at most the first 200 characters. */
  readonly value: string;
  readonly reason: string;
}

/** How a file of readings is laid out; `take`: one that a bench log names. */
export type ReadingLayout = 'long' | 'wide' | 'bench log' | 'take';

/** An input file that was read. */
export interface InputFile {
  readonly name: string;
  readonly layout: ReadingLayout | 'references' | 'path levels' | 'budget' | 'result';
  readonly sha256: string;
  readonly bytes: number;
  /** Data rows, used or not. */
  readonly rows: number;
}

/**
 * All readings of all files, one column an array; entry i of each array belongs to reading i.
 * Only readings that can be used are here. Known gain is already subtracted from the level.
 */
export interface Readings {
  readonly files: readonly InputFile[];
  readonly takes: readonly TakeHeader[];
  readonly count: number;
  /** Index into `takes`. */
  readonly take: Int32Array;
  /** Hertz. */
  readonly frequency: Float64Array;
  /** Decibels. */
  readonly level: Float64Array;
  /** Line in the take's file. */
  readonly line: Int32Array;
  /** Standard uncertainty in dB; NaN where a row gives none; absent where no file has the column. The same for the rest. */
  readonly uncertainty: Float64Array | undefined;
  readonly averages: Float64Array | undefined;
  readonly coherence: Float64Array | undefined;
  /** Background noise level in dB, on the scale of `level`. */
  readonly noise: Float64Array | undefined;
  readonly unused: readonly UnusedRow[];
  /** Things worth saying that stop nothing: an unknown column, an assumed unit. One sentence each. */
  readonly notices: readonly string[];
}

/** What `readFiles` needs to know beside the files' names. */
export interface ReadingOptions {
  /** Formula that makes a level in dB from the file's numeric columns (`--level`). */
  readonly levelFormula?: string;
  /** Called now and then with the bytes read so far and in all. */
  readonly onProgress?: (done: number, total: number) => void;
}
