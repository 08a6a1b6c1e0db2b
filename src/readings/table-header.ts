import type { InputFault } from '../quantity/input-fault.ts';
import { type ColumnRule, meaningOf } from './column-vocabulary.ts';

/** Where a known column stands and how its numbers become those of the program. */
export interface KnownColumn {
  /** Counted from 0. */
  readonly index: number;
  /** As the user wrote it. */
  readonly header: string;
  readonly factor: number;
  readonly linear: boolean;
}

/** The header line of a table, understood. */
export interface TableHeader<Name extends string> {
  readonly file: string;
  readonly line: number;
  readonly headers: readonly string[];
  readonly known: ReadonlyMap<Name, KnownColumn>;
  /** Headers that are not known, with their place. */
  readonly unknown: readonly { readonly index: number; readonly header: string }[];
  readonly faults: readonly InputFault[];
  readonly notices: readonly string[];
}

/** Finds the known columns of a header line; two headers that mean the same are faults. */
export function readHeader<Name extends string>(
  file: string,
  fields: readonly string[],
  line: number,
  rules: readonly ColumnRule<Name>[],
): TableHeader<Name> {
  const headers = fields.map((field) => field.trim());
  const known = new Map<Name, KnownColumn>();
  const unknown: { index: number; header: string }[] = [];
  const faults: InputFault[] = [];
  const notices: string[] = [];
  headers.forEach((header, index) => {
    const meaning = meaningOf(header, rules);
    if (meaning === undefined || meaning.kind !== 'known') {
      unknown.push({ index, header });
      if (meaning !== undefined) {
        const trouble = meaning.kind === 'unit missing' ? 'names no unit' : 'has a unit that is not known';
        notices.push(
          `${file}: the column \`${header}\` ${trouble} and is kept out; \`${meaning.rule.title}\` would be read.`,
        );
      }
      return;
    }
    const { rule, factor, assumed } = meaning;
    const before = known.get(rule.name);
    if (before !== undefined) {
      faults.push({
        place: { file, line, column: header },
        found: `two headers with the same meaning, \`${before.header}\` and \`${header}\``,
        expected: `one column for it, such as \`${rule.title}\``,
        remedy: 'Remove or rename the column that is not meant.',
      });
      return;
    }
    known.set(rule.name, { index, header, factor, linear: rule.linear === true });
    if (assumed !== undefined) {
      notices.push(`${file}: the column \`${header}\` names no unit; its numbers are taken as ${assumed}.`);
    }
  });
  return { file, line, headers, known, unknown, faults, notices };
}

/** Faults for the columns that a table must have and has not. */
export function missingColumns<Name extends string>(
  header: TableHeader<Name>,
  required: readonly Name[],
  rules: readonly ColumnRule<Name>[],
  example: string,
): InputFault[] {
  const missing = required.filter((name) => !header.known.has(name));
  if (missing.length === 0) return [];
  const place = { file: header.file, line: header.line };
  const found = `the headers ${list(header.headers)}`;
  if (header.known.size === 0) {
    return [
      {
        place,
        found: `no header that is known, but ${list(header.headers)}`,
        expected: example,
        remedy: 'Write a header line with these names above the numbers.',
      },
    ];
  }
  return missing.map((name) => {
    const titles = rules.filter((rule) => rule.name === name).map((rule) => rule.title);
    return {
      place: { ...place, column: titles[0]! },
      found,
      expected: `a column ${titles.map((title) => `\`${title}\``).join(' or ')}, as in ${example}`,
      remedy: 'Add the column, or rename the one that holds it.',
    };
  });
}

/**
 * One notice that names all columns that nothing uses; undefined where there are none.
 * @param used places of columns that are used although they are not known.
 * @param unread known columns that this layout has no use for.
 */
export function unknownNotice<Name extends string>(
  header: TableHeader<Name>,
  used: readonly number[] = [],
  unread: (name: Name) => boolean = () => false,
): string | undefined {
  const others = [...header.known].filter(([name]) => unread(name)).map(([, column]) => column);
  const names = [...header.unknown, ...others]
    .filter(({ index, header: name }) => name !== '' && !used.includes(index))
    .sort((a, b) => a.index - b.index)
    .map(({ header: name }) => name);
  if (names.length === 0) return undefined;
  const [noun, verb] = names.length === 1 ? ['column', 'is'] : ['columns', 'are'];
  return `${header.file}: the ${noun} ${list(names)} ${verb} not known here and ${verb} kept out.`;
}

/** Headers in a sentence, at most twelve of them. */
export function list(headers: readonly string[]): string {
  const shown = headers.slice(0, 12).map((header) => `\`${header}\``);
  const more = headers.length > 12 ? ` and ${headers.length - 12} more` : '';
  return `${shown.join(', ')}${more}`;
}
