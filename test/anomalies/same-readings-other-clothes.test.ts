/** What the contract says is recognised: one table in many clothes gives one answer. */
import { expect, test } from 'vitest';
import { type Files, solveFiles } from '../command/solve-folder.ts';

const PLAIN = 'emitter,receiver,frequency_hz,level_db\nA,B,1000,10.5\nA,C,1000,8.5\nB,C,1000,6\n';

const decimalComma = (separator: string) =>
  PLAIN.replaceAll(',', separator).replaceAll('10.5', '10,5').replaceAll('8.5', '8,5');

const CLOTHES: readonly (readonly [string, string | Uint8Array])[] = [
  ['as it is', PLAIN],
  ['byte-order mark', `\uFEFF${PLAIN}`],
  ['CRLF', PLAIN.replaceAll('\n', '\r\n')],
  ['mixed line ends', PLAIN.replace('\n', '\r\n')],
  ['no line end at the end', PLAIN.trimEnd()],
  ['blank lines at the end', `${PLAIN}\n\n`],
  ['semicolon', PLAIN.replaceAll(',', ';')],
  ['tab', PLAIN.replaceAll(',', '\t')],
  ['semicolon and decimal comma', decimalComma(';')],
  ['tab and decimal comma', decimalComma('\t')],
  ['comment lines', `# bench 4, 21 degrees\n${PLAIN.replace('A,C', '# cable changed\nA,C')}`],
  ['quoted fields', PLAIN.replaceAll('A,', '"A",')],
  ['spreadsheet clothes', `\uFEFF${decimalComma(';').replaceAll('\n', '\r\n')}`],
  [
    'capital headers',
    PLAIN.replace('emitter,receiver,frequency_hz,level_db', 'EMITTER,Receiver,Frequency Hz,LEVEL-DB'),
  ],
  ['unit in brackets', PLAIN.replace('frequency_hz', 'frequency [kHz]').replaceAll('1000', '1')],
  ['frequency in kHz', PLAIN.replace('frequency_hz', 'frequency_khz').replaceAll('1000', '1')],
  ['frequency in MHz', PLAIN.replace('frequency_hz', 'frequency_mhz').replaceAll('1000', '0.001')],
  ['frequency with an exponent', PLAIN.replaceAll('1000', '1e3')],
  ['columns in another order', 'level_db,receiver,emitter,frequency_hz\n10.5,B,A,1000\n8.5,C,A,1000\n6,C,B,1000\n'],
  ['wide', 'frequency_hz,A>B,A>C,B>C\n1000,10.5,8.5,6\n'],
  ['wide with a decimal comma', 'frequency_khz;A>B;A>C;B>C\n1;10,5;8,5;6\n'],
];

test.each(CLOTHES)('%s', async (_, text) => {
  const solved = await solveFiles({ 'pairs.csv': text }, ['pairs.csv', '--model', 'reciprocal']);
  expect(solved.code, solved.said).toBe(0);
  expect(['A', 'B', 'C'].map((unit) => solved.level(unit))).toEqual([6.5, 4, 2]);
  expect(solved.response('A').frequency_hz).toBe('1000');
  expect(solved.rows('residuals.csv')).toHaveLength(3);
});

test('a column nobody knows is kept out with a notice', async () => {
  const text = PLAIN.split('\n').map((line, i) => (line === '' ? '' : `${line},${i === 0 ? 'weather' : 'fair'}`));
  const solved = await solveFiles({ 'pairs.csv': text.join('\n') }, ['pairs.csv', '--model', 'reciprocal']);
  expect(solved.code, solved.said).toBe(0);
  expect(solved.said).toMatch(/weather/);
  expect(solved.level('A')).toBe(6.5);
});

test('a unit name may hold a hash, a comma, a space and letters of any language', async () => {
  const names = ['S#1', 'left, front', 'Gerät µ'];
  const row = (i: number, j: number, level: number) => `"${names[i]}","${names[j]}",1000,${level}`;
  const files: Files = {
    'pairs.csv': `emitter,receiver,frequency_hz,level_db\n${row(0, 1, 10)}\n${row(0, 2, 8)}\n${row(1, 2, 6)}\n`,
  };
  const solved = await solveFiles(files, ['pairs.csv', '--model', 'reciprocal']);
  expect(solved.code, solved.said).toBe(0);
  expect(names.map((name) => solved.level(name))).toEqual([6, 4, 2]);
});
