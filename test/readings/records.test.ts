import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { InputError } from '../../src/quantity/input-fault.ts';
import { recordReader } from '../../src/readings/records.ts';
import type { Separator } from '../../src/readings/separator.ts';

function recordsOf(blocks: readonly string[], separator: Separator = ',') {
  const records: [number, ...string[]][] = [];
  const comments: number[] = [];
  const open: number[] = [];
  const reader = recordReader('x.csv', {
    separator: () => separator,
    comment: (_, line) => comments.push(line),
    record: (fields, line, ended) => {
      records.push([line, ...fields]);
      if (!ended) open.push(line);
    },
  });
  for (const block of blocks) reader.push(block);
  reader.finish();
  return { records, comments, open };
}

describe('records', () => {
  test('lines keep their number over blank lines, comments and records of blanks', () => {
    const { records, comments, open } = recordsOf(['a,b\n\n# c\n  \n1,2\n,,\n', ' # d\n3,4']);
    expect(records).toEqual([
      [1, 'a', 'b'],
      [5, '1', '2'],
      [8, '3', '4'],
    ]);
    expect(comments).toEqual([3, 7]);
    expect(open).toEqual([8]);
  });

  test('LF, CRLF, CR and any mix of them end a line', () => {
    expect(recordsOf(['a,b\r\nc,d\ne,f\rg,h\r\n']).records.map((record) => record.join(' '))).toEqual([
      '1 a b',
      '2 c d',
      '3 e f',
      '4 g h',
    ]);
  });

  test('a hash inside a field is no comment, nor is one in quotes', () => {
    expect(recordsOf(['S#1,#2,3\n"#3",4,5\n']).records).toEqual([
      [1, 'S#1', '#2', '3'],
      [2, '#3', '4', '5'],
    ]);
  });

  test('quoted fields may hold separators, doubled quotes and line ends, also across blocks', () => {
    const { records } = recordsOf(['a,"b,""c"""\n"d\n', '\n# no comment\ne",f\ng,h\n']);
    expect(records).toEqual([
      [1, 'a', 'b,"c"'],
      [2, 'd\n\n# no comment\ne', 'f'],
      [6, 'g', 'h'],
    ]);
  });

  test('a quoted field may follow a tab', () => {
    expect(recordsOf(['"a"\t"b c"\t\t"d"\n'], '\t').records).toEqual([[1, 'a', 'b c', '', 'd']]);
  });

  test.each([
    ['a quote inside a field', 'a,b\n1,5" disc\n', 2],
    ['two quotes inside a field', 'a,b\n1,2\n3,5"x" disc\n', 3],
    ['text behind a closing quote', 'a,b\n"1"x,2\n', 2],
    ['a quote that is never closed', 'a,b\n1,2\n"3,4\n5,6\n', 3],
  ])('%s is a fault in its own line', (_, text, line) => {
    const work = () => recordsOf([text]);
    expect(work).toThrow(InputError);
    expect(work).toThrow(new RegExp(`x\\.csv:${line}: found a double quote`));
  });

  test('a quote that is never closed is found before the whole file is swallowed', () => {
    expect(() => recordsOf(['a,b\n"3,4\n', '5,6\n'.repeat(300)])).toThrow(/x\.csv:2:/);
  });

  test('records with and without quotes come out the same wherever the text is cut into blocks', () => {
    const field = fc.stringMatching(/^[a-z0-9#";\n ]{0,6}$/);
    fc.assert(
      fc.property(
        fc.array(fc.tuple(fc.stringMatching(/^[a-z]{1,4}$/), field, field), { minLength: 1, maxLength: 20 }),
        fc.func(fc.boolean()),
        (rows, cutAfter) => {
          const quoted = (text: string) => (/[",;\n#]/.test(text) ? `"${text.replaceAll('"', '""')}"` : text);
          const lines = rows
            .map((row) => `${row.map(quoted).join(';')}\n`)
            .join('')
            .split(/(?<=\n)/);
          const blocks: string[] = [''];
          lines.forEach((line, i) => {
            if (cutAfter(i)) blocks.push(line);
            else blocks[blocks.length - 1] += line;
          });
          const { records } = recordsOf(blocks, ';');
          // Blanks around a field mean nothing, so they are not compared.
          const bare = (text: string) => text.trim();
          expect(records.map(([, ...fields]) => fields.map(bare))).toEqual(rows.map((row) => row.map(bare)));
        },
      ),
      { seed: 11, numRuns: 200 },
    );
  });
});
