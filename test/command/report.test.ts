import { existsSync, mkdirSync, readdirSync, readFileSync, rmSync, statSync, writeFileSync } from 'node:fs';
import { describe, expect, it } from 'vitest';
import { writeBenchSet } from '../bench/make-set.ts';
import { benchFolder, pairsCsv, RING_WITH_DIAGONALS } from './bench-folder.ts';

const bench = benchFolder();
const solved = (): void => {
  bench.write('bench.csv', pairsCsv(RING_WITH_DIAGONALS));
  expect(bench.run('solve', 'bench.csv', '--out', 'result', '--u', '0.2', '--quiet').status).toBe(0);
};
const page = () => readFileSync(bench.at('result/report.html'), 'utf8');

describe('oddloop report', () => {
  it('makes page, pictures and tables anew, to the same bytes', () => {
    solved();
    const before = new Map(
      readdirSync(bench.at('result/figures')).map((name) => [
        name,
        readFileSync(bench.at(`result/figures/${name}`), 'utf8'),
      ]),
    );
    const [first, responses] = [page(), readFileSync(bench.at('result/responses.csv'), 'utf8')];
    rmSync(bench.at('result/report.html'));
    rmSync(bench.at('result/figures'), { recursive: true });
    rmSync(bench.at('result/responses.csv'));
    const { status, stderr } = bench.run('report', 'result', '--quiet');
    expect({ status, stderr }).toEqual({ status: 0, stderr: '' });
    expect(page() === first).toBe(true);
    expect(readFileSync(bench.at('result/responses.csv'), 'utf8')).toBe(responses);
    expect(readdirSync(bench.at('result/figures')).sort()).toEqual([...before.keys()].sort());
    for (const [name, text] of before) expect(readFileSync(bench.at(`result/figures/${name}`), 'utf8')).toBe(text);
  });

  it('replaces nothing where an input file has changed since, and names it', () => {
    solved();
    const first = page();
    writeFileSync(bench.at('bench.csv'), `${pairsCsv(RING_WITH_DIAGONALS)}# later\n`);
    const { status, stderr } = bench.run('report', 'result');
    expect(status).toBe(3);
    expect(stderr).toContain('bench.csv: found a file that has changed since the result was made');
    expect(page() === first).toBe(true);
  });

  it('says what is missing where the folder holds no result, or its input is gone', () => {
    mkdirSync(bench.at('empty'));
    expect(bench.run('report', 'empty').status).toBe(3);
    solved();
    rmSync(bench.at('bench.csv'));
    const { status, stderr } = bench.run('report', 'result');
    expect(status).toBe(3);
    expect(stderr).toContain('bench.csv: found no such file');
    expect(existsSync(bench.at('result/report.html'))).toBe(true);
  });

  it('needs the name of a result', () => {
    expect(bench.run('report').status).toBe(2);
  });
});

describe('report.html', () => {
  it('of 10 units and 500 frequencies stays below 2 MB', async () => {
    const { takes, frequencies } = await writeBenchSet(bench.at('bench.csv'), { scale: 0.5, units: 10 });
    expect([takes, frequencies]).toEqual([90, 500]);
    expect(bench.run('solve', 'bench.csv', '--out', 'result', '--quiet').status).toBe(0);
    expect(statSync(bench.at('result/report.html')).size).toBeLessThan(2e6);
  });
});
