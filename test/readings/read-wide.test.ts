import { describe, expect, test } from 'vitest';
import { readFiles } from '../../src/readings/read-files.ts';
import { pairOf } from '../../src/readings/read-wide.ts';
import { faultsOf, memorySource } from './memory-source.ts';

const read = (text: string, levelFormula?: string) =>
  readFiles([memorySource('wide.csv', text)], levelFormula === undefined ? {} : { levelFormula });

describe('wide layout', () => {
  test('each header is a take and each cell a reading', async () => {
    const readings = await read('# lab\nfrequency_khz;A>B;A>B#2;B > A [dB]\n1;-3,5;-3,6;-4\n2;-5;;-6\n');
    expect(readings.files[0]).toMatchObject({ layout: 'wide', rows: 2 });
    expect(readings.takes.map(({ emitter, receiver, repeat, line }) => [emitter, receiver, repeat, line])).toEqual([
      ['A', 'B', '', 2],
      ['A', 'B', '2', 2],
      ['B', 'A', '', 2],
    ]);
    expect([...readings.take]).toEqual([0, 1, 2, 0, 2]);
    expect([...readings.frequency]).toEqual([1000, 1000, 1000, 2000, 2000]);
    expect([...readings.level]).toEqual([-3.5, -3.6, -4, -5, -6]);
    expect([...readings.line]).toEqual([3, 3, 3, 4, 4]);
    expect(readings.unused).toEqual([
      { file: 'wide.csv', line: 4, column: 'A>B#2', value: '', reason: 'not measured: blank' },
    ]);
  });

  test('a frequency that cannot be used takes its row out, a cell only itself', async () => {
    const readings = await read('frequency_hz,A>B,A>C\n1000,-3,0\n-1,-3,-4\n2000,x,-4\n');
    expect([...readings.level]).toEqual([-3, -4]);
    expect(readings.unused.map(({ line, column }) => [line, column])).toEqual([
      [2, 'A>C'],
      [3, 'frequency_hz'],
      [4, 'A>B'],
    ]);
  });

  test('a column without a level is told, and makes no take', async () => {
    const readings = await read('frequency_hz,A>B,A>C,weather\n1000,-3,,fair\n');
    expect(readings.takes).toHaveLength(1);
    expect(readings.notices).toEqual([
      'wide.csv: the column `weather` is not known here and is kept out.',
      'wide.csv: nothing was measured in the columns `A>C`.',
    ]);
  });

  test('a formula sees the cell as level_db', async () => {
    const readings = await read('frequency_khz,A>B\n1,0\n10,-3\n', 'level_db + 20*log10(frequency_hz/1000)');
    expect([...readings.level]).toEqual([0, 17]);
    const [fault] = await faultsOf(read('frequency_khz,A>B\n1,0\n', 'out_mv'));
    expect(fault!.expected).toMatch(/`frequency_hz`, `level_db`/);
    const [infinite] = await faultsOf(read('frequency_khz,A>B\n1,1\n2,0\n', '1/level_db'));
    expect(infinite).toMatchObject({ place: { line: 3, column: 'A>B' } });
  });

  test.each([
    ['frequency_hz,A>B,A>B', /two columns for the same take/, 'A>B'],
    ['frequency_hz,A>B#2,A>B#2', /two columns for the same take/, 'A>B#2'],
    ['frequency_hz,A>,A>C', /without a receiver/, 'A>'],
    ['frequency_hz,>B,A>C', /without an emitter/, '>B'],
    ['A>B,frequency_hz,A>C', /as the first column/, 'A>B'],
    ['pitch,A>B,A>C', /as the first column/, 'pitch'],
    ['frequency [rad/s],A>B,A>C', /as the first column/, 'frequency [rad/s]'],
    ['frequency_hz,S#1>B,A>S#1', /take 1 with S or a take with the unit S#1/, 'A>S#1'],
  ])('%s stops the run', async (header, words, column) => {
    const [fault] = await faultsOf(read(`${header}\n1000,-3,-4\n`));
    expect(fault!.place).toEqual({ file: 'wide.csv', line: 1, column });
    expect(fault!.found).toMatch(words);
    expect(fault!.remedy).not.toBe('');
  });
});

test('only a last # with digits is a repeat', () => {
  expect(pairOf('S#1>R')).toEqual({ emitter: 'S#1', receiver: 'R', repeat: '' });
  expect(pairOf('A>S#1#2')).toEqual({ emitter: 'A', receiver: 'S#1', repeat: '2' });
  expect(pairOf('A>S#b')).toEqual({ emitter: 'A', receiver: 'S#b', repeat: '' });
  expect(pairOf('A>B>C')).toBeUndefined();
  expect(pairOf('A-B')).toBeUndefined();
});
