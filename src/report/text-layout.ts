/** Lays text out for a terminal of 80 columns. Widths are counted in columns: East Asian characters and emoji take two. */

export const TERMINAL_WIDTH = 80;

const SEGMENTER = new Intl.Segmenter('en', { granularity: 'grapheme' });
/** Wide by Unicode Standard Annex #11 (East Asian width W and F), in ranges coarse enough for alignment. */
const WIDE =
  /[\u1100-\u115f\u2e80-\ua4cf\uac00-\ud7a3\uf900-\ufaff\ufe30-\ufe6f\uff00-\uff60\uffe0-\uffe6]|[\u{1f300}-\u{1faff}]|[\u{20000}-\u{3fffd}]|\p{Emoji_Presentation}/u;
/** Control characters, and those that turn the direction of text or break lines: a label must not move the cursor. */
const UNSAFE = /[\p{Cc}\u2028\u2029\u200e\u200f\u202a-\u202e\u2066-\u2069\ufeff]/gu;

/** The text with what would act on a terminal made visible, such as `\u001b`. */
export function visible(text: string): string {
  return text.replace(UNSAFE, (character) => `\\u${character.charCodeAt(0).toString(16).padStart(4, '0')}`);
}

/** Where a line may end: not within `A > B`, nor between a number and its unit. */
const BREAK = /(?<! >|^>) (?!> |dB\b|k?Hz\b|MHz\b|%)/;

/** Columns that a text takes. */
export function displayWidth(text: string): number {
  let width = 0;
  for (const { segment } of SEGMENTER.segment(text)) width += WIDE.test(segment) ? 2 : 1;
  return width;
}

/** Lines of at most `width` columns, those after the first indented; a word that is longer is broken. */
export function wrapped(text: string, { width = TERMINAL_WIDTH, indent = '' } = {}): string[] {
  const lines: string[] = [];
  let line = '';
  const room = () => width - (lines.length === 0 ? 0 : displayWidth(indent));
  const push = () => {
    lines.push(lines.length === 0 ? line : indent + line);
    line = '';
  };
  for (const word of visible(text).split(BREAK)) {
    const longer = line === '' ? word : `${line} ${word}`;
    if (displayWidth(longer) <= room()) {
      line = longer;
      continue;
    }
    if (line !== '') push();
    const pieces = broken(word, room());
    for (const piece of pieces.slice(0, -1)) {
      line = piece;
      push();
    }
    line = pieces.at(-1)!;
  }
  if (line !== '' || lines.length === 0) push();
  return lines;
}

export interface TableRow {
  readonly cells: readonly string[];
  /** How its lines are set off; absent for plain. */
  readonly style?: ((line: string) => string) | undefined;
}

const GAP = '  ';
/** A label column narrower than this can no longer be read, whatever the other columns want. */
const NARROWEST_LABEL = 8;

/**
 * A table as lines: the first column starts at the left and is broken over lines where it is too wide for the rest, all
 * others end at the right, but the last one where it holds words.
 */
export function textTable(
  rows: readonly TableRow[],
  width: number = TERMINAL_WIDTH,
  { lastIsWords = false } = {},
): string[] {
  const safe = rows.map(({ cells, style }) => ({ cells: cells.map(visible), style }));
  const columns = Math.max(0, ...safe.map(({ cells }) => cells.length));
  const widths = Array.from({ length: columns }, (_, c) =>
    Math.max(...safe.map(({ cells }) => displayWidth(cells[c] ?? ''))),
  );
  const rest = widths.slice(1).reduce((sum, each) => sum + each + GAP.length, 0);
  const labelWidth = Math.min(widths[0] ?? 0, Math.max(NARROWEST_LABEL, width - rest));
  return safe.flatMap(({ cells: [label = '', ...others], style }) => {
    const pieces = broken(label, labelWidth);
    const numbers = others
      .map((cell, c) => {
        const gap = ' '.repeat(widths[c + 1]! - displayWidth(cell));
        return GAP + (lastIsWords && c === others.length - 1 ? cell + gap : gap + cell);
      })
      .join('');
    const first = padded(pieces[0]!, labelWidth) + numbers;
    const lines = [first.trimEnd(), ...pieces.slice(1)];
    return style === undefined ? lines : lines.map(style);
  });
}

function padded(text: string, width: number): string {
  return text + ' '.repeat(Math.max(0, width - displayWidth(text)));
}

/** The text in pieces of at most `width` columns; at least one, perhaps empty. */
function broken(text: string, width: number): string[] {
  const pieces: string[] = [];
  let piece = '';
  let used = 0;
  for (const { segment } of SEGMENTER.segment(text)) {
    const own = displayWidth(segment);
    if (used + own > width && piece !== '') {
      pieces.push(piece);
      piece = '';
      used = 0;
    }
    piece += segment;
    used += own;
  }
  return [...pieces, piece];
}
