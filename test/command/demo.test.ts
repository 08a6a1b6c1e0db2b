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
