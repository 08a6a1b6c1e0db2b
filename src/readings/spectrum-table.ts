import { hertzPerUnit } from '../quantity/frequency.ts';
import { type ColumnRule, headerParts, type ReadingColumn } from './column-vocabulary.ts';
import { numberReader } from './number-text.ts';
import { SEPARATORS, type Separator, splitOutsideQuotes } from './separator.ts';
import { readHeader, type TableHeader } from './table-header.ts';

/** Where the table of a spectrum begins among the lines of its file. */
export interface SpectrumStart {
  /** Counted from 0: the header, or the first row where there is none. */
  readonly at: number;
  readonly separator: Separator;
  /** Absent for a table without headers. */
  readonly header: TableHeader<ReadingColumn> | undefined;
  /** Fields of the line at `at`. */
  readonly fields: readonly string[];
}

/** Lines that are searched for the beginning of the table. Common practice, no source. */
const LONGEST_PREAMBLE = 500;

/**
 * Finds the table in the lines of a file that may begin with anything: first by a header that names a frequency and a
 * level, then by the first line that is nothing but numbers and is followed by more of the same or by the end.
 * Undefined where there is neither.
 * @param needsLevel false where a formula makes the level.
 */
export function findSpectrum(
  file: string,
  lines: readonly string[],
  rules: readonly ColumnRule<ReadingColumn>[],
  needsLevel: boolean,
): SpectrumStart | undefined {
  const content = [...lines.keys()].filter((i) => /^\s*[^\s#]/.test(lines[i]!)).slice(0, LONGEST_PREAMBLE);
  for (const at of content) {
    for (const separator of SEPARATORS) {
      const fields = splitOutsideQuotes(lines[at]!, separator);
      if (fields.length < 2) continue;
      const header = readHeader(file, fields, at + 1, [...rules, ...looserRules(fields, rules, file)]);
      if (!header.known.has('frequency') || (needsLevel && !header.known.has('level'))) continue;
      return { at, separator, header, fields };
    }
  }
  for (const [k, at] of content.entries()) {
    for (const separator of SEPARATORS) {
      const fields = splitOutsideQuotes(lines[at]!, separator);
      const next = content[k + 1];
      const after = next === undefined ? fields : splitOutsideQuotes(lines[next]!, separator);
      if (fields.length < 2 || after.length !== fields.length || !allNumbers(fields) || !allNumbers(after)) continue;
      return { at, separator, header: undefined, fields };
    }
  }
  return undefined;
}

function allNumbers(fields: readonly string[]): boolean {
  // One reader a mark: which of them holds is decided later, over all rows.
  const readers = [numberReader('.'), numberReader(',')];
  return fields.every((field) => readers.some(({ read }) => !Number.isNaN(read(field))));
}

/**
 * Instruments name their columns in their own words. Where no header is the known one, a single header with a frequency
 * unit is the frequency, and a single one in dB the level.
 */
function looserRules(
  fields: readonly string[],
  rules: readonly ColumnRule<ReadingColumn>[],
  file: string,
): ColumnRule<ReadingColumn>[] {
  const { known, unknown } = readHeader(file, fields, 1, rules);
  const found: ColumnRule<ReadingColumn>[] = [];
  const add = (name: 'frequency' | 'level', unit: (text: string) => number | undefined) => {
    const rule = rules.find((other) => other.name === name);
    if (rule === undefined || known.has(name)) return;
    const words = unknown.flatMap(({ header }) => wordBefore(header, unit) ?? []);
    if (words.length === 1) found.push({ name, title: rule.title, word: words[0]!, unit });
  };
  add('frequency', hertzPerUnit);
  add('level', (text) => (/^db(?:re.*)?$/.test(text) ? 1 : undefined));
  return found;
}

/** A header's word where its unit, in brackets or at its end, is one of `unit`. */
function wordBefore(header: string, unit: (text: string) => number | undefined): string | undefined {
  const parts = headerParts(header);
  if (parts.unit !== '') return unit(parts.unit) === undefined ? undefined : parts.word;
  const match = /^(.+?)(k?hz|mhz|db)$/.exec(parts.word);
  return match !== null && unit(match[2]!) !== undefined ? match[1] : undefined;
}
