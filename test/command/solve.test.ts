import { spawnSync } from 'node:child_process';
import { createHash } from 'node:crypto';
import { existsSync, mkdirSync, readdirSync, readFileSync, writeFileSync } from 'node:fs';
import { join, relative } from 'node:path';
import { describe, expect, it } from 'vitest';
import { benchFolder, PROGRAM, pairsCsv, RING_WITH_DIAGONALS } from './bench-folder.ts';

const bench = benchFolder();
const RECIPROCAL = ['--model', 'reciprocal', '--out', 'result'];

/** Every file under the folder, those of its own folders included. */
const filesIn = (folder: string) =>
  Object.fromEntries(
    readdirSync(folder, { recursive: true, withFileTypes: true })
      .filter((entry) => entry.isFile())
      .map((entry) => join(entry.parentPath, entry.name))
      .map((path) => [relative(folder, path), readFileSync(path, 'utf8')]),
  );

describe('oddloop solve', () => {
  it('ends with 0, the summary on stdout, nothing on stderr, and the files in the folder', () => {
    bench.write('bench.csv', pairsCsv(RING_WITH_DIAGONALS));
    const { status, stdout, stderr } = bench.run('solve', 'bench.csv', ...RECIPROCAL);
    expect({ status, stderr }).toEqual({ status: 0, stderr: '' });
    expect(stdout).toContain('N04');
    expect(readdirSync(bench.at('result'))).toEqual(expect.arrayContaining(['responses.csv', 'summary.json']));
    expect(readdirSync(bench.at('.')).sort()).toEqual(['bench.csv', 'result']);
  });

  it('writes the levels that the pairs were made of', () => {
    bench.write('bench.csv', pairsCsv(RING_WITH_DIAGONALS));
    bench.run('solve', 'bench.csv', ...RECIPROCAL);
    const rows = readFileSync(bench.at('result/responses.csv'), 'utf8').trim().split('\n').slice(1);
    expect(rows).toHaveLength(4 * 3);
    const levels = rows.map((row) => row.split(',')).filter(([unit]) => unit === 'N02');
    // The 0.1 dB on every second reading is shared by three readings a unit: it moves a level by less than 0.1 dB.
    for (const row of levels) expect(Math.abs(Number(row[4]) - -23)).toBeLessThan(0.1);
  });

  it('writes the same bytes each time', () => {
    bench.write('bench.csv', pairsCsv(RING_WITH_DIAGONALS));
    bench.run('solve', 'bench.csv', ...RECIPROCAL);
    const first = filesIn(bench.at('result'));
    const again = bench.run('solve', 'bench.csv', ...RECIPROCAL);
    expect(again.status).toBe(0);
    expect(filesIn(bench.at('result'))).toEqual(first);
  });

  it('repeats a run from its summary.json, to the same bytes', () => {
    bench.write('bench.csv', pairsCsv(RING_WITH_DIAGONALS));
    const options = ['--u', '0.3', '--band', '500 Hz..3 kHz', '--lookalikes', 'N01=N02', '--coverage', '0.9'];
    bench.run('solve', 'bench.csv', ...options, '--model', 'reciprocal', '--out', 'first');
    const { status, stderr } = bench.run('solve', '--settings', 'first/summary.json', '--out', 'second');
    expect({ status, stderr }).toEqual({ status: 0, stderr: '' });
    expect(filesIn(bench.at('second'))).toEqual(filesIn(bench.at('first')));
    const { settings } = JSON.parse(readFileSync(bench.at('second/summary.json'), 'utf8'));
    expect(settings).toMatchObject({ files: ['bench.csv'], u: 0.3, band: '500 Hz..3 kHz', coverage: 0.9 });
  });

  it('keeps the SHA-256 of certificates and path levels with those of the readings, and what is worth saying of them', () => {
    bench.write(
      'bench.csv',
      pairsCsv(RING_WITH_DIAGONALS)
        .replace('level_db', 'level_db,path')
        .replace(/(\.\d)$/gm, '$1,block'),
    );
    const tables = {
      'refs.csv': 'unit,frequency_hz,level_db,u_db,laboratory\nN01,1000,-20,0.1,north\n',
      'paths.csv': 'path,frequency,level_db\nblock,1000,0.5\nblock,4000,0.5\n',
    };
    for (const [name, text] of Object.entries(tables)) bench.write(name, text);
    const options = ['--refs', 'refs.csv', '--path', 'paths.csv', '--u', '0.1'];
    const { status } = bench.run('solve', 'bench.csv', ...options, ...RECIPROCAL);
    expect(status).toBe(0);
    const { input, notices } = JSON.parse(readFileSync(bench.at('result/summary.json'), 'utf8'));
    const sha256 = (text: string) => createHash('sha256').update(text).digest('hex');
    expect(input.files.slice(1)).toEqual([
      {
        name: 'refs.csv',
        layout: 'references',
        sha256: sha256(tables['refs.csv']),
        bytes: tables['refs.csv'].length,
        rows: 1,
      },
      {
        name: 'paths.csv',
        layout: 'path levels',
        sha256: sha256(tables['paths.csv']),
        bytes: tables['paths.csv'].length,
        rows: 2,
      },
    ]);
    expect(notices).toContain('refs.csv: the column `laboratory` is not known here and is kept out.');
    expect(notices).toContain('paths.csv: the column `frequency` names no unit; its numbers are taken as Hz.');

    bench.write('refs.csv', tables['refs.csv'].replace('-20', '-21'));
    const again = bench.run('solve', '--settings', 'result/summary.json', '--out', 'again');
    expect(again.stderr).toMatch(/^refs\.csv is not what it was/);
  });

  it('tells the faults of certificates and path levels together', () => {
    bench.write('bench.csv', pairsCsv(RING_WITH_DIAGONALS));
    bench.write('refs.csv', 'unit,frequency_hz,level_db,u_db\nN01,1000,loud,0.1\n');
    bench.write('paths.csv', 'path,frequency_hz,level_db\nblock,low,0.5\n');
    const { status, stderr } = bench.run(
      'solve',
      'bench.csv',
      '--refs',
      'refs.csv',
      '--path',
      'paths.csv',
      ...RECIPROCAL,
    );
    expect(status).toBe(3);
    expect(stderr).toContain('refs.csv:2 level_db');
    expect(stderr).toContain('paths.csv:2 frequency_hz');
  });

  it('can repeat a run into its own folder', () => {
    bench.write('bench.csv', pairsCsv(RING_WITH_DIAGONALS));
    bench.run('solve', 'bench.csv', ...RECIPROCAL);
    const first = filesIn(bench.at('result'));
    expect(bench.run('solve', '--settings', 'result/summary.json', '--out', 'result').status).toBe(0);
    expect(filesIn(bench.at('result'))).toEqual(first);
  });

  it('lets the command line win over the settings', () => {
    bench.write('bench.csv', pairsCsv(RING_WITH_DIAGONALS));
    bench.run('solve', 'bench.csv', '--u', '0.3', ...RECIPROCAL);
    bench.run('solve', '--settings', 'result/summary.json', '--u', '0.5', '--out', 'again');
    const { settings } = JSON.parse(readFileSync(bench.at('again/summary.json'), 'utf8'));
    expect(settings).toMatchObject({ model: 'reciprocal', u: 0.5 });
  });

  it('says so where an input file has changed since the run that is repeated', () => {
    bench.write('bench.csv', pairsCsv(RING_WITH_DIAGONALS));
    bench.run('solve', 'bench.csv', ...RECIPROCAL);
    bench.write('bench.csv', pairsCsv(RING_WITH_DIAGONALS).replace('-43.0', '-43.2'));
    const { status, stderr } = bench.run('solve', '--settings', 'result/summary.json', '--out', 'again');
    expect(status).toBe(0);
    expect(stderr).toBe('bench.csv is not what it was in the run that is repeated: its SHA-256 differs.\n');
  });

  it('with --json prints JSON and nothing else, the same as summary.json', () => {
    bench.write('bench.csv', pairsCsv(RING_WITH_DIAGONALS));
    const { status, stdout, stderr } = bench.run('solve', 'bench.csv', ...RECIPROCAL, '--json');
    expect({ status, stderr }).toEqual({ status: 0, stderr: '' });
    expect(JSON.parse(stdout)).toEqual(JSON.parse(readFileSync(bench.at('result/summary.json'), 'utf8')));
    expect(JSON.parse(stdout).schema).toMatch(/^oddloop-summary\//);
  });

  it('with --quiet prints nothing', () => {
    bench.write('bench.csv', pairsCsv(RING_WITH_DIAGONALS));
    const { status, stdout, stderr } = bench.run('solve', 'bench.csv', ...RECIPROCAL, '--quiet');
    expect({ status, stdout, stderr }).toEqual({ status: 0, stdout: '', stderr: '' });
  });

  it.each([{}, { NO_COLOR: '1' }, { FORCE_COLOR: '1' }])('sends no colour into a pipe, with %j', (environment) => {
    bench.write('bench.csv', pairsCsv(RING_WITH_DIAGONALS));
    const { stdout, stderr } = bench.runWith(environment, 'solve', 'bench.csv', ...RECIPROCAL);
    expect(stdout).not.toBe('');
    expect(stdout + stderr).not.toContain('\u001B');
  });

  describe('with --strict', () => {
    /** All pairs of four, taken twice: the noise of 0.1 dB is that of the repeats. */
    const clean = () => {
      const [header, ...rows] = pairsCsv(RING_WITH_DIAGONALS).trim().split('\n');
      return [`${header},repeat`, ...rows.map((row) => `${row},1`), ...rows.map((row) => `${nudged(row)},2`)].join(
        '\n',
      );
    };
    const nudged = (row: string) => row.replace(/\.0$/, '.2').replace(/\.1$/, '.0');

    it('ends with 0 where nothing is flagged', () => {
      bench.write('bench.csv', clean());
      const { status, stdout } = bench.run('solve', 'bench.csv', ...RECIPROCAL, '--strict');
      expect({ status, said: stdout.includes('No take disagrees with the rest.') }).toEqual({ status: 0, said: true });
    });

    it('ends with 1 where a take is flagged, with all outputs there; without it, with 0', () => {
      const demo = readFileSync(new URL('../../data-demo/pairs.csv', import.meta.url), 'utf8');
      bench.write('bench.csv', demo);
      expect(bench.run('solve', 'bench.csv', ...RECIPROCAL, '--strict', '--quiet').status).toBe(1);
      expect(existsSync(bench.at('result/holds.csv'))).toBe(true);
      expect(bench.run('solve', 'bench.csv', ...RECIPROCAL, '--quiet').status).toBe(0);
    });
  });

  it('writes risk and tolerance among the settings, and the verdicts as data', () => {
    bench.write('bench.csv', pairsCsv(RING_WITH_DIAGONALS));
    const options = ['--risk', '0.01', '--tolerance', '2', '--u', '0.3'];
    bench.run('solve', 'bench.csv', ...RECIPROCAL, ...options);
    const summary = JSON.parse(readFileSync(bench.at('result/summary.json'), 'utf8'));
    expect(summary.settings).toMatchObject({ risk: 0.01, tolerance: 2 });
    expect(summary.takes.counts).toMatchObject({ agrees: 6, flagged: 0, tied: 0 });
    expect(summary.mounting.tolerance_db).toBe(2);
  });

  it('ends with 4 where nothing can be told apart, with the outputs there and a message on stderr', () => {
    bench.write('ring.csv', pairsCsv(RING_WITH_DIAGONALS.slice(0, 4)));
    const { status, stderr } = bench.run('solve', 'ring.csv', ...RECIPROCAL);
    expect(status).toBe(4);
    expect(stderr).toMatch(/^Nothing can be told apart: /);
    expect(readFileSync(bench.at('result/responses.csv'), 'utf8')).toMatch(
      /^N01,,both,1000,,,,,,,,open,not testable$/m,
    );
  });

  it('ends with 3 and writes nothing where the input cannot be used', () => {
    bench.write('bad.csv', 'emitter,receiver\nN01,N02\n');
    const { status, stdout, stderr } = bench.run('solve', 'bad.csv', ...RECIPROCAL);
    expect({ status, stdout }).toEqual({ status: 3, stdout: '' });
    expect(stderr).toContain('bad.csv:1');
    expect(existsSync(bench.at('result'))).toBe(false);
  });

  it('names every file that is missing', () => {
    const { status, stderr } = bench.run('solve', 'one.csv', 'two.csv', ...RECIPROCAL);
    expect(status).toBe(3);
    for (const name of ['one.csv', 'two.csv']) expect(stderr).toContain(name);
  });

  it.each(['bench and log.csv', 'Prüfstand ± 2 µ.csv', 'a;b"c\'d$.csv', '計測.csv'])(
    'reads a file named %s',
    (name) => {
      bench.write(name, pairsCsv(RING_WITH_DIAGONALS));
      expect(bench.run('solve', name, ...RECIPROCAL).status).toBe(0);
      const { settings } = JSON.parse(readFileSync(bench.at('result/summary.json'), 'utf8'));
      expect(settings.files).toEqual([name]);
    },
  );

  it('reads a file with a leading dash after --, and repeats that run', () => {
    bench.write('-n.csv', pairsCsv(RING_WITH_DIAGONALS));
    expect(bench.run('solve', ...RECIPROCAL, '--', '-n.csv').status).toBe(0);
    expect(bench.run('solve', '--settings', 'result/summary.json', '--out', 'again').status).toBe(0);
  });

  it('shows control characters of a name instead of sending them to the terminal', () => {
    const { status, stderr } = bench.run('solve', '\u001B[31mred.csv', ...RECIPROCAL);
    expect(status).toBe(3);
    expect(stderr).toContain('\\u001b[31mred.csv');
    expect(stderr).not.toContain('\u001B');
  });
});

describe('the output folder of solve', () => {
  it('is not touched where it holds anything else', () => {
    bench.write('bench.csv', pairsCsv(RING_WITH_DIAGONALS));
    mkdirSync(bench.at('result'));
    bench.write('result/thesis.tex', 'years of work');
    const { status, stderr } = bench.run('solve', 'bench.csv', ...RECIPROCAL);
    expect(status).toBe(3);
    expect(stderr).toContain('result: found a folder with other things in it (thesis.tex)');
    expect(readdirSync(bench.at('result'))).toEqual(['thesis.tex']);
  });

  it('is looked at before the files are read', () => {
    const { status, stderr } = bench.run('solve', 'missing.csv', '--out', 'no/such/place');
    expect(status).toBe(3);
    expect(stderr).toContain('no/such/place');
    expect(stderr).not.toContain('missing.csv');
  });

  it('keeps the earlier result where the disk takes no more, and leaves nothing half-written', () => {
    const frequencies = Array.from({ length: 400 }, (_, f) => 1000 + f);
    bench.write('bench.csv', pairsCsv(RING_WITH_DIAGONALS, frequencies));
    bench.run('solve', 'bench.csv', ...RECIPROCAL);
    const before = filesIn(bench.at('result'));
    // Files of at most 8 blocks of 1024 bytes: the write fails as on a full disk.
    const command = `ulimit -f 8; exec "$0" "$1" solve bench.csv --u 1 --model reciprocal --out result`;
    const { status, stderr } = spawnSync('bash', ['-c', command, process.execPath, PROGRAM], {
      cwd: bench.at('.'),
      encoding: 'utf8',
    });
    expect(status).toBe(3);
    expect(stderr).toContain('a limit on the size of files');
    expect(stderr).not.toContain('    at ');
    expect(filesIn(bench.at('result'))).toEqual(before);
    expect(readdirSync(bench.at('.')).sort()).toEqual(['bench.csv', 'result']);
  });

  it('goes again after an interruption while writing, with the exit code of one', () => {
    const frequencies = Array.from({ length: 200 }, (_, f) => 1000 + f);
    bench.write('bench.csv', pairsCsv(RING_WITH_DIAGONALS, frequencies));
    // The signal comes from inside, at the first file that is opened for writing, so that no clock decides.
    const hook = bench.at('hook.mjs');
    writeFileSync(
      hook,
      `import fs from 'node:fs/promises';
      import { syncBuiltinESMExports } from 'node:module';
      const { open } = fs;
      fs.open = async (...words) => {
        process.kill(process.pid, 'SIGINT');
        await new Promise((done) => setTimeout(done, 10_000));
        return open(...words);
      };
      syncBuiltinESMExports();`,
    );
    const run = bench.runWith({ NODE_OPTIONS: `--import=${hook}` }, 'solve', 'bench.csv', ...RECIPROCAL);
    expect({ status: run.status, stdout: run.stdout, stderr: run.stderr }).toEqual({
      status: 130,
      stdout: '',
      stderr: '',
    });
    expect(readdirSync(bench.at('.')).sort()).toEqual(['bench.csv', 'hook.mjs']);
  });
});
