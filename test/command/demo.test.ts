import { mkdirSync, readdirSync, readFileSync, rmSync } from 'node:fs';
import { describe, expect, it } from 'vitest';
import { benchFolder } from './bench-folder.ts';

const bench = benchFolder();
const DEMO_SET = ['README.md', 'pairs.csv', 'truth.json'];

describe('oddloop demo', () => {
  it('writes the demo set and its result, and says where to look', () => {
    const { status, stdout, stderr } = bench.run('demo');
    expect({ status, stderr }).toEqual({ status: 0, stderr: '' });
    expect(readdirSync(bench.at('.'))).toEqual(['oddloop-demo']);
    expect(readdirSync(bench.at('oddloop-demo')).sort()).toEqual([...DEMO_SET, 'result'].sort());
    expect(readdirSync(bench.at('oddloop-demo/result'))).toContain('responses.csv');
    for (const name of [...DEMO_SET, 'result']) expect(stdout).toContain(`oddloop-demo/${name}`);
  });

  it('writes the set byte for byte as the package holds it', () => {
    bench.run('demo', 'here');
    for (const name of DEMO_SET) {
      const own = readFileSync(new URL(`../../data-demo/${name}`, import.meta.url));
      expect(readFileSync(bench.at(`here/${name}`)).equals(own), name).toBe(true);
    }
  });

  it('has a README that lists the files beside it, and no others', () => {
    bench.run('demo', 'here');
    const readme = readFileSync(bench.at('here/README.md'), 'utf8');
    const listed = [...readme.matchAll(/^\| `([^`]+)`/gm)].map(([, name]) => name!);
    expect(['README.md', ...listed].sort()).toEqual([...DEMO_SET].sort());
  });

  it('finds the three faults that are hidden in the set, and says what each of them is and what to redo', () => {
    const { stdout } = bench.run('demo');
    const text = stdout.replace(/\s+/g, ' ');
    expect(text).toContain('2 of 161 takes disagree with the rest and were left out: T130 and T026.');
    expect(text).toMatch(
      /T130: N06 > N09, afternoon; oddloop-demo\/pairs\.csv:15482 .*? Reads like: moved gain, \+3\.\d+ dB/,
    );
    expect(text).toMatch(/else take N06 > N09 again\. - T026: N03 > N08, morning; oddloop-demo\/pairs\.csv:3002 /);
    expect(text).toContain("Reads like: another unit's label: N04 as emitter. Check whether it was N04");
    expect(text).toMatch(/it breaks for N07 \(71–89 kHz\)/);
    expect(text).toMatch(/N07: broken at 71–89 kHz: it changes with its partner by 2\.\d dB/);
    for (const line of stdout.split('\n')) expect(line.length).toBeLessThanOrEqual(80);
  });

  it('leaves the two takes out of the levels, and says so in the tables', () => {
    bench.run('demo', 'here');
    const rows = (name: string) =>
      readFileSync(bench.at(`here/result/${name}`), 'utf8')
        .trim()
        .split('\n');
    const flagged = rows('takes.csv').filter((row) => row.includes(',flagged,'));
    expect(flagged.map((row) => row.split(',')[0])).toEqual(['T026', 'T130']);
    // Nothing of them was used: their readings have no redundancy.
    const left = rows('residuals.csv').filter((row) => row.endsWith(','));
    expect(new Set(left.map((row) => row.split(',')[0]))).toEqual(new Set(['T026', 'T130']));
    const broken = rows('responses.csv').filter((row) => row.endsWith(',broken'));
    expect(new Set(broken.map((row) => row.split(',')[0]))).toEqual(new Set(['N07']));
    for (const row of broken) expect(Math.abs(Number(row.split(',')[3]) / 79.4e3 - 1)).toBeLessThan(0.13);
  });

  it('runs again in the same folder, to the same bytes', () => {
    bench.run('demo', 'here');
    const first = readFileSync(bench.at('here/result/responses.csv'), 'utf8');
    expect(bench.run('demo', 'here').status).toBe(0);
    expect(readFileSync(bench.at('here/result/responses.csv'), 'utf8')).toBe(first);
  });

  it('does not overwrite a demo set that was changed, nor one with a file missing', () => {
    bench.run('demo', 'here');
    bench.write('here/pairs.csv', 'mine');
    const changed = bench.run('demo', 'here');
    expect({ status: changed.status, stdout: changed.stdout }).toEqual({ status: 3, stdout: '' });
    expect(changed.stderr).toContain('here/pairs.csv: found a changed file');
    expect(readFileSync(bench.at('here/pairs.csv'), 'utf8')).toBe('mine');
    rmSync(bench.at('here/pairs.csv'));
    expect(bench.run('demo', 'here').status).toBe(3);
  });

  it('does not touch a folder that holds anything else', () => {
    mkdirSync(bench.at('here'));
    bench.write('here/notes.txt', 'mine');
    expect(bench.run('demo', 'here').status).toBe(3);
    expect(readdirSync(bench.at('here'))).toEqual(['notes.txt']);
  });

  it('with --quiet prints nothing', () => {
    const { status, stdout, stderr } = bench.run('demo', 'here', '--quiet');
    expect({ status, stdout, stderr }).toEqual({ status: 0, stdout: '', stderr: '' });
  });
});
