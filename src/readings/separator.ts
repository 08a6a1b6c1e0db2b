/** What stands between the fields of a row. */
export type Separator = ',' | ';' | '\t';

/** In order of preference where nothing else decides: a comma is the likeliest to be part of something else. */
export const SEPARATORS: readonly Separator[] = ['\t', ';', ','];

/**
 * The separator of a table, from its first line: the one that makes most headers known, then the one that makes most
 * fields. Separators in quotes do not count.
 * @param knows whether a header means something in this kind of table.
 */
export function sniffSeparator(firstLine: string, knows: (header: string) => boolean): Separator {
  let best: Separator = ',';
  let bestScore = 0;
  for (const separator of SEPARATORS) {
    const fields = splitOutsideQuotes(firstLine, separator);
    const score = 1e6 * fields.filter(knows).length + fields.length;
    if (score > bestScore && fields.length > 1) [best, bestScore] = [separator, score];
  }
  return best;
}

/** The separator that a spreadsheet's first line `sep=;` declares; undefined for any other line. */
export function declaredSeparator(line: string): Separator | undefined {
  const match = /^"?sep=([,;\t])"?\s*$/i.exec(line);
  return match === null ? undefined : (match[1] as Separator);
}

export function splitOutsideQuotes(line: string, separator: Separator): string[] {
  const fields: string[] = [];
  let field = '';
  let quoted = false;
  for (const character of line) {
    if (character === '"') quoted = !quoted;
    else if (character === separator && !quoted) {
      fields.push(field);
      field = '';
    } else field += character;
  }
  fields.push(field);
  return fields;
}
