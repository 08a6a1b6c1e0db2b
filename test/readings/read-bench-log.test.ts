import { describe, expect, test } from 'vitest';
import { readFiles } from '../../src/readings/read-files.ts';
import { type Content, faultsOf, memorySource } from './memory-source.ts';

const read = (log: string, beside: Readonly<Record<string, Content>>, levelFormula?: string) =>
  readFiles([memorySource('log.csv', log, beside)], levelFormula === undefined ? {} : { levelFormula });
const ONE = 'file,emitter,receiver\nab.csv,A,B\n';

describe('bench log', () => {
  test('each named file is a take of its own, with what the log notes of it', async () => {
    const readings = await read(
      'file;emitter;receiver;session;gain_db;u_db;distance_m;note\nab.csv;A;B;s1;20;0,2;0,5;warm\nbc.csv;B;C;s1;;;;\n',
      { 'ab.csv': 'frequency_hz,level_db\n1000,-3\n2000,-4\n', 'bc.csv': '1000\t-5,5\n2000\t-6,5\n' },
    );
    expect(readings.takes).toMatchObject([
      { file: 'ab.csv', line: 2, emitter: 'A', receiver: 'B', session: 's1', distance: 0.5, note: 'warm' },
      { file: 'bc.csv', line: 1, emitter: 'B', receiver: 'C', session: 's1', distance: undefined },
    ]);
    expect([...readings.level]).toEqual([-23, -24, -5.5, -6.5]);
    expect([...readings.line]).toEqual([2, 3, 1, 2]);
    expect([...readings.uncertainty!]).toEqual([0.2, 0.2, Number.NaN, Number.NaN]);
    expect(readings.files.map(({ name, layout, rows }) => [name, layout, rows])).toEqual([
      ['log.csv', 'bench log', 2],
      ['ab.csv', 'take', 2],
      ['bc.csv', 'take', 2],
    ]);
    expect(readings.notices).toEqual([expect.stringMatching(/1 of the files that it names have no header/)]);
  });

  test.each([
    ['a preamble', 'Analyser 7\nStart, 1000\n\nfrequency_khz;level_db\n1;-3,5\n2;-4\n', [5, 6]],
    ['a preamble and no header', 'Analyser 7, serial 12\nSweep\n1000;-3,5\n2000;-4\n', [3, 4]],
    ['words of an instrument', '# run\nFreq [kHz],Magnitude (dB),Phase (deg)\n1,-3.5,10\n2,-4,20\n', [3, 4]],
    ['units at the end of a word', 'f_Hz\tmag_dB\n1000\t-3.5\n2000\t-4\n', [2, 3]],
    ['quoted fields', '"frequency_hz","level_db"\n"1000","-3.5"\n"2000","-4"\n', [2, 3]],
    ['CRLF and a byte-order mark', '\uFEFFfrequency_hz,level_db\r\n1000,-3.5\r\n2000,-4\r\n', [2, 3]],
    ['other columns', 'phase,level_db,frequency_hz\n1,-3.5,1000\n1,-4,2000\n', [2, 3]],
    ['a ratio', `ratio,frequency_hz\n${10 ** (-3.5 / 20)},1000\n${10 ** (-4 / 20)},2000\n`, [2, 3]],
  ])('a spectrum with %s is understood', async (_, text, lines) => {
    const readings = await read(ONE, { 'ab.csv': text });
    expect([...readings.frequency]).toEqual([1000, 2000]);
    // A ratio written with 17 digits comes back within the rounding of the logarithm.
    expect(readings.level[0]).toBeCloseTo(-3.5, 12);
    expect(readings.level[1]).toBeCloseTo(-4, 12);
    expect([...readings.line]).toEqual(lines);
    expect(readings.unused).toEqual([]);
  });

  test('rows of a spectrum that cannot be used are kept with their reason', async () => {
    const readings = await read(ONE, { 'ab.csv': 'frequency_hz,level_db\n1000,-3\n2000,\n3000\n4000,-4\n' });
    expect([...readings.frequency]).toEqual([1000, 4000]);
    expect(readings.unused.map(({ file, line, column }) => [file, line, column])).toEqual([
      ['ab.csv', 3, 'level_db'],
      ['ab.csv', 4, ''],
    ]);
  });

  test('a formula may name columns of the log and of the spectrum', async () => {
    const readings = await read(
      'file,emitter,receiver,drive_v\nab.csv,A,B,10\nac.csv,A,C,1\n',
      { 'ab.csv': 'frequency_hz,out_v\n1000,100\n', 'ac.csv': 'frequency_hz,out_v\n1000,100\n2000,1\n' },
      '20*log10(out_v/drive_v)',
    );
    expect([...readings.level]).toEqual([20, 40, 0]);
  });

  test.each([
    ['that is missing', undefined, { file: 'log.csv', line: 2, column: 'file' }, /`ab\.csv`: no such file/],
    ['that is empty', '', { file: 'log.csv', line: 2, column: 'file' }, /`ab\.csv`: an empty file/],
    ['without a table', 'hello\nworld\n', { file: 'log.csv', line: 2, column: 'file' }, /no table/],
    [
      'of three columns without header',
      '1000,-3,10\n2000,-4,20\n',
      { file: 'ab.csv', line: 1 },
      /3 columns of numbers/,
    ],
    [
      'with two levels',
      'frequency_hz,level_db,ratio\n1000,-3,1\n',
      { file: 'ab.csv', line: 1, column: 'ratio' },
      /same meaning/,
    ],
    [
      'of blanks',
      'frequency_hz,level_db\n1000,\n',
      { file: 'ab.csv', line: 2, column: 'level_db' },
      /nothing in the file/,
    ],
    ['that is no text', Uint8Array.of(1, 0, 2, 0), { file: 'log.csv', line: 2, column: 'file' }, /zero byte/],
  ])('a file %s is a fault', async (_, content, place, words) => {
    const [fault] = await faultsOf(read(ONE, content === undefined ? {} : { 'ab.csv': content }));
    expect(fault!.place).toEqual(place);
    expect(fault!.found).toMatch(words);
  });

  test('all files that cannot be used are told at once', async () => {
    const faults = await faultsOf(read('file,emitter,receiver\nx,A,B\ny,A,C\nx,B,C\n', {}));
    expect(faults.map(({ place }) => place.line)).toEqual([2, 3, 4]);
    expect(faults[2]!.found).toMatch(/a second time \(first in line 2\)/);
  });

  test('a number in the log and a column in the file for the same thing is a fault', async () => {
    const [fault] = await faultsOf(
      read('file,emitter,receiver,gain_db\nab.csv,A,B,20\n', {
        'ab.csv': 'frequency_hz,level_db,gain_db\n1000,-3,20\n',
      }),
    );
    expect(fault!.place).toEqual({ file: 'ab.csv', line: 1, column: 'gain_db' });
  });

  test('what is to be said of a header is said once for all spectra that have it', async () => {
    const spectrum = (level: number) => `frequency_hz,level_db,phase\n1000,${level},1\n`;
    const { notices } = await read('file,emitter,receiver\nx,A,B\ny,A,C\nz,B,C\n', {
      x: spectrum(-1),
      y: spectrum(-2),
      z: spectrum(-3),
    });
    expect(notices).toEqual([
      'x: the column `phase` is not known here and is kept out.',
      'log.csv: 2 more of the files that it names have the same header as x.',
    ]);
  });

  test('a row of the log that cannot be used is kept with its reason', async () => {
    const readings = await read('file,emitter,receiver,u_db\nab.csv,A,B,\n,A,C,\nac.csv,,C,\nac.csv,A,C,-1\n', {
      'ab.csv': '1000,-3\n',
    });
    expect(readings.takes).toHaveLength(1);
    expect(readings.unused.map(({ line, column }) => [line, column])).toEqual([
      [3, 'file'],
      [4, 'emitter'],
      [5, 'u_db'],
    ]);
  });

  test('a log without units is a fault with an example', async () => {
    const [fault] = await faultsOf(read('file,session\nab.csv,s1\n', {}));
    expect(fault!.expected).toMatch(/file,emitter,receiver/);
  });

  test('equal spectra are told, since one may have been copied', async () => {
    const readings = await read('file,emitter,receiver\nab.csv,A,B\nac.csv,A,C\n', {
      'ab.csv': '1000,-3\n',
      'ac.csv': '1000,-3\n',
    });
    expect(readings.count).toBe(2);
    expect(readings.notices).toContain('ac.csv has the same content as ab.csv.');
  });
});
