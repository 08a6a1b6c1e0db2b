import { expect, test } from 'vitest';
import { meaningOf, READING_COLUMNS } from '../../src/readings/column-vocabulary.ts';
import { declaredSeparator, sniffSeparator } from '../../src/readings/separator.ts';

const knows = (header: string) => meaningOf(header, READING_COLUMNS) !== undefined;

test.each([
  ['emitter,receiver,frequency_hz,level_db', ','],
  ['emitter;receiver;frequency_hz;level_db', ';'],
  ['emitter\treceiver\tfrequency_hz\tlevel_db', '\t'],
  ['emitter;receiver;frequency_hz;level_db;note, if any, of the day', ';'],
  ['emitter,receiver,frequency_hz,level_db,a;b;c;d;e;f;g', ','],
  ['"a;b;c;d";x,"y;z;w"', ';'],
  ['one', ','],
])('%s', (line, separator) => {
  expect(sniffSeparator(line, knows)).toBe(separator);
});

test('a spreadsheet may declare its separator', () => {
  expect(['sep=;', '"sep=,"', 'SEP=\t', 'sep=x', 'separator'].map(declaredSeparator)).toEqual([
    ';',
    ',',
    '\t',
    undefined,
    undefined,
  ]);
});
