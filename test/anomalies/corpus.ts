/** The corpus of broken input: one file, one fault, and what the program owes the user for it. */

export interface Broken {
  readonly fault: string;
  readonly file: string;
  /** Further arguments; the file stands first where absent. */
  readonly args?: readonly string[];
  readonly code: 0 | 3;
  /** What the message must hold: where it is, what was found, what to do. */
  readonly says: readonly RegExp[];
  /** Lines of the file that must be in unused.csv; only where the rest is solved. */
  readonly unused?: readonly number[];
  /** Content for what cannot be kept as a text file. */
  readonly bytes?: Uint8Array;
}

/** The first line of a right file shows what was expected. */
const EXAMPLE = /emitter,\s*receiver,\s*frequency_hz,\s*level_db/i;

const utf16 = (text: string): Uint8Array => Buffer.concat([Buffer.from([0xff, 0xfe]), Buffer.from(text, 'utf16le')]);

const TABLE = 'emitter,receiver,frequency_hz,level_db\nA,B,1000,10\nA,C,1000,8\nB,C,1000,6\n';

/** The same bytes every time: a linear congruential sequence (constants of Numerical Recipes, common practice). */
const rubbish = (length: number): Uint8Array => {
  let state = 12345;
  return Uint8Array.from({ length }, () => {
    state = (Math.imul(state, 1664525) + 1013904223) >>> 0;
    return state >>> 24;
  });
};

const unusable = (fault: string, file: string, says: readonly RegExp[], more: Partial<Broken> = {}): Broken => ({
  fault,
  file,
  code: 3,
  says: [new RegExp(file.replace('.', '\\.')), ...says],
  ...more,
});

/** A single bad row: the rest is solved, the row is kept with its reason. */
const oneRow = (fault: string, file: string, line: number): Broken => ({
  fault,
  file,
  code: 0,
  says: [/unused\.csv/],
  unused: [line],
});

export const CORPUS: readonly Broken[] = [
  unusable('an empty file', 'empty.csv', [/empty/i]),
  unusable('a header and nothing below it', 'header-only.csv', [/no (rows|readings|data)|header/i]),
  unusable('headers of another language', 'wrong-headers.csv', [/wrong-headers\.csv:1/, EXAMPLE]),
  unusable('a header that comes twice', 'doubled-header.csv', [/doubled-header\.csv:1/, /level_db/]),
  unusable('two units in a frequency header', 'two-units-in-header.csv', [/header\.csv:1/, /frequency_khz_mhz/]),
  unusable('two units in a level header', 'two-units-in-level-header.csv', [/header\.csv:1/, /level_db_mv/]),
  unusable('level and ratio side by side', 'level-and-ratio.csv', [/ratio\.csv:1/, /level_db/, /ratio/]),
  unusable('two frequency columns', 'two-frequencies.csv', [/frequencies\.csv:1/, /frequency_hz/, /frequency_khz/]),
  oneRow('text for one level', 'one-level-text.csv', 4),
  oneRow('NaN for one level', 'one-level-nan.csv', 4),
  oneRow('infinity for one level', 'one-level-infinite.csv', 4),
  oneRow('a number too large for one level', 'one-level-overflowing.csv', 4),
  oneRow('one level beyond anything physical', 'one-level-absurd.csv', 4),
  oneRow('a blank for one level', 'one-level-blank.csv', 4),
  unusable('text for all levels', 'all-levels-text.csv', [/loud/, /level_db/]),
  unusable('NaN for all levels', 'all-levels-nan.csv', [/NaN/, /level_db/]),
  unusable('infinity for all levels', 'all-levels-infinite.csv', [/inf/, /level_db/]),
  unusable('numbers too large for all levels', 'all-levels-overflowing.csv', [/1e999/, /level_db/]),
  unusable('blanks for all levels', 'all-levels-blank.csv', [/blank|empty|not measured/i]),
  oneRow('text for one frequency', 'one-frequency-text.csv', 5),
  oneRow('a blank for one frequency', 'one-frequency-blank.csv', 5),
  oneRow('a comma between thousands, beside decimal points', 'one-frequency-thousands-comma.csv', 4),
  oneRow('one negative frequency', 'one-frequency-negative.csv', 5),
  oneRow('one frequency of zero', 'one-frequency-zero.csv', 5),
  unusable('negative frequencies only', 'all-frequencies-negative.csv', [/-1000/, /frequency/]),
  unusable('frequencies of zero only', 'all-frequencies-zero.csv', [/frequency/]),
  oneRow('one ratio of zero', 'one-ratio-zero.csv', 3),
  oneRow('one negative ratio', 'one-ratio-negative.csv', 3),
  unusable('ratios of zero only', 'all-ratios-zero.csv', [/ratio/]),
  oneRow('one emitter without a name', 'one-emitter-blank.csv', 6),
  oneRow('one negative uncertainty', 'one-u-negative.csv', 7),
  oneRow('one uncertainty of zero', 'one-u-zero.csv', 7),
  oneRow('text for one uncertainty', 'one-u-text.csv', 7),
  oneRow('one coherence above one', 'one-coherence-above-one.csv', 7),
  unusable('a decimal comma with a comma as separator', 'decimal-comma-with-comma.csv', [
    /with-comma\.csv:2/,
    /decimal comma|separator|semicolon/i,
  ]),
  oneRow('one row with a field too many', 'one-row-too-long.csv', 4),
  oneRow('one row with a field too few', 'one-row-too-short.csv', 4),
  unusable('a frequency that comes twice in a take', 'repeated-frequency.csv', [
    /frequency\.csv:8/,
    /1 ?kHz|1000/,
    /repeat/,
  ]),
  unusable('a quote that is never closed', 'truncated-quote.csv', [/quote\.csv:\d+/, /quote/i]),
  unusable('a pair that comes twice in a wide table', 'wide-doubled-pair.csv', [/pair\.csv:1/, /A>B/, /#2/]),
  unusable('a wide header without a receiver', 'wide-pair-without-receiver.csv', [/receiver\.csv:1/, /A>/]),
  { ...oneRow('text in one cell of a wide table', 'wide-one-cell-text.csv', 3) },
  unusable('a bench log that names a missing file', 'log-naming-missing-file.csv', [/file\.csv:2/, /nowhere\.csv/]),
  unusable('a bench log that names an empty file', 'log-naming-empty-file.csv', [/empty\.csv/]),
  unusable('a file that is not there', 'nowhere.csv', [/not|no such|cannot/i]),
  unusable('a reference for a unit that nobody measured', 'refs-unknown-unit.csv', [/unit\.csv:3/, /Z9/], {
    args: ['sound.csv', '--refs', 'refs-unknown-unit.csv'],
  }),
  unusable('a certificate with expanded_db and no k', 'refs-expanded-without-k.csv', [/k\.csv:\d/, /\bk\b/], {
    args: ['sound.csv', '--refs', 'refs-expanded-without-k.csv'],
  }),
  unusable('text for a level in a certificate', 'refs-text-level.csv', [/level\.csv:2/, /loud/], {
    args: ['sound.csv', '--refs', 'refs-text-level.csv'],
  }),
  unusable('UTF-16', 'utf-16.csv', [/UTF-8/], { bytes: utf16(TABLE) }),
  unusable('UTF-16 without a mark', 'utf-16-bare.csv', [/UTF-8|text/], { bytes: utf16(TABLE).subarray(2) }),
  unusable('bytes that are no text', 'rubbish.csv', [/text|UTF-8/], { bytes: rubbish(4096) }),
  unusable('zero bytes', 'zeros.csv', [/text|UTF-8/], { bytes: new Uint8Array(512) }),
  unusable('Latin-1 in a unit name', 'latin-1.csv', [/UTF-8/], {
    bytes: Buffer.from(TABLE.replaceAll('A', 'Gerät'), 'latin1'),
  }),
];
