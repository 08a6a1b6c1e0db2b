import { readdirSync } from 'node:fs';
import { describe, expect, it } from 'vitest';
import { benchFolder, pairsCsv, RING_WITH_DIAGONALS } from './bench-folder.ts';

const bench = benchFolder();

describe('oddloop inspect', () => {
  it('says what the file holds, on stdout, and writes nothing', () => {
    bench.write('bench.csv', pairsCsv(RING_WITH_DIAGONALS));
    const { status, stdout, stderr } = bench.run('inspect', 'bench.csv', '--model', 'reciprocal');
    expect({ status, stderr }).toEqual({ status: 0, stderr: '' });
    expect(stdout).toContain('1 file, 6 takes, 4 units, 6 pairs');
    expect(readdirSync(bench.at('.'))).toEqual(['bench.csv']);
  });

  it('with --json prints JSON and nothing else', () => {
    bench.write('bench.csv', pairsCsv(RING_WITH_DIAGONALS));
    const { status, stdout, stderr } = bench.run('inspect', 'bench.csv', '--json');
    expect({ status, stderr }).toEqual({ status: 0, stderr: '' });
    expect(typeof JSON.parse(stdout)).toBe('object');
  });

  it('ends with 4 where nothing can be told apart, and still says what is there', () => {
    bench.write('ring.csv', pairsCsv(RING_WITH_DIAGONALS.slice(0, 4)));
    const { status, stdout, stderr } = bench.run('inspect', 'ring.csv', '--model', 'reciprocal');
    expect(status).toBe(4);
    expect(stdout).toContain('N01');
    expect(stderr).toMatch(/^Nothing can be told apart/);
  });

  it('takes the settings of an earlier run', () => {
    bench.write('ring.csv', pairsCsv(RING_WITH_DIAGONALS.slice(0, 4)));
    bench.write('settings.json', '{"files": ["ring.csv"], "model": "reciprocal", "datum": "balanced"}');
    expect(bench.run('inspect', '--settings', 'settings.json').status).toBe(0);
  });

  it('tells faults of the file with its line, on stderr, and ends with 3', () => {
    bench.write('bad.csv', `${pairsCsv(RING_WITH_DIAGONALS)}N01,N02,1000,-43\n`);
    const { status, stdout, stderr } = bench.run('inspect', 'bad.csv');
    expect({ status, stdout }).toEqual({ status: 3, stdout: '' });
    expect(stderr).toContain('bad.csv:20');
    expect(stderr).not.toContain('    at ');
  });
});
