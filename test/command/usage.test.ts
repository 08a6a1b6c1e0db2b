import { spawn, spawnSync } from 'node:child_process';
import { once } from 'node:events';
import { cpSync, mkdirSync, openSync, readFileSync } from 'node:fs';
import { describe, expect, it } from 'vitest';
import { benchFolder, PROGRAM, pairsCsv, RING_WITH_DIAGONALS } from './bench-folder.ts';

const bench = benchFolder();

describe('oddloop', () => {
  it('prints its version alone', () => {
    const { version } = JSON.parse(readFileSync(new URL('../../package.json', import.meta.url), 'utf8'));
    const { status, stdout, stderr } = bench.run('--version');
    expect({ status, stdout, stderr }).toEqual({ status: 0, stdout: `${version}\n`, stderr: '' });
  });

  it.each([
    [['--help'], ['demo', 'solve', 'inspect']],
    [
      ['help', 'solve'],
      ['--lookalikes', '--settings'],
    ],
    [
      ['solve', '--help'],
      ['--out', '--reversible', 'Exit codes', 'oddloop solve bench.csv --out result'],
    ],
    [
      ['inspect', '--help'],
      ['--grid', '--json', 'oddloop inspect bench.csv'],
    ],
    [['demo', '--help'], ['oddloop-demo']],
  ])('prints help for %j on stdout, in 80 columns, and ends with 0', (words, named) => {
    const { status, stdout, stderr } = bench.run(...words);
    expect({ status, stderr }).toEqual({ status: 0, stderr: '' });
    for (const name of named) expect(stdout).toContain(name);
    for (const line of stdout.split('\n')) expect(line.length).toBeLessThanOrEqual(80);
  });

  it.each([
    [[], 'Usage: oddloop'],
    [['slove', 'bench.csv'], 'Did you mean solve?'],
    [['bench.csv'], 'oddloop solve bench.csv --out result'],
    [['solve', 'a.csv', '--outt', 'r'], 'Did you mean --out?'],
    [['solve', 'a.csv', '--out'], '--out'],
    [['solve', 'a.csv'], '--out: found no folder to write to'],
    [['solve', '--out', 'r'], 'FILE: found no input file'],
    [['solve', '', '--out', 'r'], 'FILE: found ""'],
    [['solve', 'a.csv', '--out', ''], '--out: found ""'],
    [
      ['solve', 'a.csv', '--out', 'r', '--u', '0,3'],
      '--u: found "0,3"; expected a standard uncertainty from 0.000001 to 1000 dB',
    ],
    [['solve', 'a.csv', '--out', 'r', '--model', 'best'], 'auto, reciprocal or directional'],
    [['inspect'], 'Example: oddloop inspect bench.csv'],
    [['inspect', 'a.csv', '--out', 'r'], '--out'],
    [['demo', 'a', 'b'], 'too many arguments'],
    [['demo', ' '], 'DIR: found " "'],
  ])('answers wrong usage %j with 2 and a line that helps, on stderr, without a stack', (words, said) => {
    const { status, stdout, stderr } = bench.run(...words);
    expect({ status, stdout }).toEqual({ status: 2, stdout: '' });
    expect(stderr).toContain(said);
    expect(stderr).not.toContain('    at ');
    expect(stderr).not.toMatch(/^error:/m);
  });

  it('says how to build it where it is not built', () => {
    mkdirSync(bench.at('bin'));
    cpSync(PROGRAM, bench.at('bin/oddloop.js'));
    bench.write('package.json', '{"type":"module"}');
    const { status, stderr } = spawnSync(process.execPath, [bench.at('bin/oddloop.js')], { encoding: 'utf8' });
    expect(status).toBe(70);
    expect(stderr).toContain('npm run build');
  });

  it('shows the stack of a defect of its own, asks to report it, and ends with 70', () => {
    bench.write('bench.csv', pairsCsv(RING_WITH_DIAGONALS));
    bench.write('hook.mjs', `Array.prototype.flatMap = function () { throw new TypeError('planted'); };`);
    const hook = { NODE_OPTIONS: `--import=${bench.at('hook.mjs')}` };
    const { status, stderr } = bench.runWith(hook, 'solve', 'bench.csv', '--out', 'result');
    expect(status).toBe(70);
    expect(stderr).toContain('TypeError: planted\n    at ');
    expect(stderr).toContain('This is a defect of oddloop');
  });

  it('is quiet about a reader who has seen enough', async () => {
    bench.write('bench.csv', pairsCsv(RING_WITH_DIAGONALS));
    const child = spawn(process.execPath, [PROGRAM, 'inspect', 'bench.csv', '--json'], { cwd: bench.at('.') });
    let stderr = '';
    child.stderr.on('data', (chunk) => {
      stderr += chunk;
    });
    child.stdout.destroy();
    const [code, signal] = await once(child, 'close');
    expect({ code, signal, stderr }).toEqual({ code: 0, signal: null, stderr: '' });
  });

  it('says so where stdout cannot take the result', () => {
    bench.write('bench.csv', pairsCsv(RING_WITH_DIAGONALS));
    const { status, stderr } = spawnSync(process.execPath, [PROGRAM, 'inspect', 'bench.csv'], {
      cwd: bench.at('.'),
      encoding: 'utf8',
      stdio: ['ignore', openSync('/dev/full', 'w'), 'pipe'],
    });
    expect(status).toBe(3);
    expect(stderr).toContain('standard output');
    expect(stderr).not.toContain('    at ');
  });
});
