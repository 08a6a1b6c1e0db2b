/** The same triangle (units 6, 4, 2) written in the three layouts, and mixed. */
import { describe, expect, test } from 'vitest';
import { misses, numberIn, solveFiles } from '../command/solve-folder.ts';

const RECIPROCAL = ['--model', 'reciprocal'] as const;
const UNITS = { A: 6, B: 4, C: 2 };

describe('wide', () => {
  test('A>B and A>B#2 are two takes of one pair: 9 and 11 make 10, and each is 1 dB off', async () => {
    const solved = await solveFiles({ 'bench.csv': 'frequency_hz,A>B,A>B#2,A>C,B>C\n1000,9,11,8,6\n' }, [
      'bench.csv',
      ...RECIPROCAL,
    ]);
    expect(solved.code, solved.said).toBe(0);
    expect(misses(solved.level, UNITS)).toEqual([]);
    const takes = solved.rows('takes.csv');
    expect(takes).toHaveLength(4);
    expect(solved.rows('pairs.csv')).toHaveLength(3);
    const off = solved.rows('residuals.csv').map((row) => Math.round(numberIn(row, 'residual_db') * 1e6) / 1e6 + 0);
    expect(off.sort((a, b) => a - b)).toEqual([-1, 0, 0, 1]);
  });

  test('a blank cell is not measured: the frequency is solved without it', async () => {
    const text = 'frequency_hz,A>B,A>B#2,A>C,B>C\n1000,10,,8,6\n2000,,10,8,6\n';
    const solved = await solveFiles({ 'bench.csv': text }, ['bench.csv', ...RECIPROCAL]);
    expect(solved.code, solved.said).toBe(0);
    expect(misses((unit) => solved.level(unit, { frequency: 2000 }), UNITS)).toEqual([]);
    expect(solved.rows('residuals.csv')).toHaveLength(6);
  });
});

describe('bench log', () => {
  const LOG = 'file,emitter,receiver,note\nrun/ab.csv,A,B,\nrun/ac.txt,A,C,warm\nrun/bc.csv,B,C,\n';

  test('each named file is a take, with headers, without them, or below a preamble', async () => {
    const solved = await solveFiles(
      {
        'log.csv': LOG,
        'run/ab.csv': 'frequency_hz,level_db\n1000,10\n2000,20\n',
        'run/ac.txt': '1000\t8\n2000\t16\n',
        'run/bc.csv': 'Analyser 7\nSweep 3 of 3\n\nfrequency_khz;level_db\n1;6\n2;12\n',
      },
      ['log.csv', ...RECIPROCAL],
    );
    expect(solved.code, solved.said).toBe(0);
    expect(misses((unit) => solved.level(unit, { frequency: 1000 }), UNITS)).toEqual([]);
    expect(misses((unit) => solved.level(unit, { frequency: 2000 }), { A: 12, B: 8, C: 4 })).toEqual([]);
  });

  test('the files are found beside the log, wherever the program is started', async () => {
    const solved = await solveFiles(
      {
        'bench/log.csv': LOG,
        'bench/run/ab.csv': '1000,10\n',
        'bench/run/ac.txt': '1000,8\n',
        'bench/run/bc.csv': '1000,6\n',
      },
      ['bench/log.csv', ...RECIPROCAL],
    );
    expect(solved.code, solved.said).toBe(0);
    expect(misses(solved.level, UNITS)).toEqual([]);
  });
});

describe('mixed', () => {
  test('a long, a wide and a log file together are one set', async () => {
    const solved = await solveFiles(
      {
        'long.csv': 'emitter,receiver,frequency_hz,level_db\nA,B,1000,10\n',
        'wide.csv': 'frequency_hz,A>C\n1000,8\n',
        'log.csv': 'file,emitter,receiver\nbc.csv,B,C\n',
        'bc.csv': 'frequency_hz,level_db\n1000,6\n',
      },
      ['long.csv', 'wide.csv', 'log.csv', ...RECIPROCAL],
    );
    expect(solved.code, solved.said).toBe(0);
    expect(misses(solved.level, UNITS)).toEqual([]);
  });

  test('amplitude ratios are levels: 100, 10 and 1000 are 40, 20 and 60 dB', async () => {
    const text = 'emitter,receiver,frequency_hz,ratio\nA,B,1000,100\nA,C,1000,10\nB,C,1000,1000\n';
    const solved = await solveFiles({ 'ratio.csv': text }, ['ratio.csv', ...RECIPROCAL]);
    expect(solved.code, solved.said).toBe(0);
    expect(misses(solved.level, { A: 0, B: 40, C: 20 })).toEqual([]);
  });

  test('a known gain in the chain is subtracted: 16 with 6 dB of gain is 10', async () => {
    const text = 'emitter,receiver,frequency_hz,level_db,gain_db\nA,B,1000,16,6\nA,C,1000,8,0\nB,C,1000,4,-2\n';
    const solved = await solveFiles({ 'gain.csv': text }, ['gain.csv', ...RECIPROCAL]);
    expect(solved.code, solved.said).toBe(0);
    expect(misses(solved.level, UNITS)).toEqual([]);
  });

  test('--level makes the level from two columns of volts', async () => {
    const text = 'emitter,receiver,frequency_hz,out_mv,in_mv\nA,B,1000,1000,10\nA,C,1000,100,10\nB,C,1000,10000,10\n';
    const solved = await solveFiles({ 'volts.csv': text }, [
      'volts.csv',
      ...RECIPROCAL,
      '--level',
      '20*log10(out_mv/in_mv)',
    ]);
    expect(solved.code, solved.said).toBe(0);
    expect(misses(solved.level, { A: 0, B: 40, C: 20 })).toEqual([]);
  });
});
