/** The real program plans a bench day, writes a sheet, and solves it once it is filled in. */
import { existsSync, readFileSync } from 'node:fs';
import { describe, expect, it } from 'vitest';
import { benchFolder, pairsCsv, RING_WITH_DIAGONALS } from './bench-folder.ts';
import { readCsv } from './run-oddloop.ts';

const bench = benchFolder();

const whatif = (...words: string[]) => bench.run('whatif', ...words);
const record = (...words: string[]) => {
  const { status, stdout, stderr } = whatif(...words, '--json');
  expect({ status, stderr }).toEqual({ status: 0, stderr: '' });
  return JSON.parse(stdout);
};
const narrow = (text: string) => text.split('\n').every((line) => [...line].length <= 80);

describe('oddloop whatif', () => {
  it('says what a design will deliver, assumptions called so, in 80 columns', () => {
    const { status, stdout, stderr } = whatif('--units', '6', '--pattern', 'all', '--effect', '1');
    expect({ status, stderr }).toEqual({ status: 0, stderr: '' });
    expect(stdout).toContain('All 6 responses can be told apart');
    expect(stdout).toContain('repeat 0.10 dB (assumption)');
    expect(stdout).toContain('not an accredited calibration');
    expect(narrow(stdout)).toBe(true);
  });

  it('compares designs side by side and marks the best of those that tell all apart', () => {
    const { comparison, designs } = record('--units', '6', '--pattern', 'all,ring,hub');
    expect(designs).toHaveLength(3);
    expect(comparison.open.map((cell: { best: boolean }) => cell.best)).toEqual([true, false, true]);
    expect(comparison.mean.map((cell: { best: boolean }) => cell.best)).toEqual([true, false, false]);
    // An even ring takes least, but is no design.
    expect(comparison.takes.map((cell: { best: boolean }) => cell.best)).toEqual([false, false, true]);
    expect(narrow(whatif('--units', '6', '--pattern', 'all,ring,hub,triangles,both-ways').stdout)).toBe(true);
  });

  it('predicts what solve then finds of readings with a u_db, in unit variance', () => {
    const design = record(
      '--units',
      '4',
      '--pattern',
      'all',
      '--repeat-db',
      '0.2',
      '--reseat-db',
      '0',
      '--partner-db',
      '0',
    );
    const rows = ['S1,S2,-40.2', 'S1,S3,-38.9', 'S1,S4,-45.1', 'S2,S3,-41', 'S2,S4,-47.3', 'S3,S4,-45.8'];
    bench.write(
      'bench.csv',
      `emitter,receiver,level_db,frequency_hz,u_db\n${rows.map((row) => `${row},1000,0.2`).join('\n')}\n`,
    );
    expect(bench.run('solve', 'bench.csv', '--out', 'result', '--model', 'reciprocal').status).toBe(0);
    const found = readCsv(bench.at('result/responses.csv'));
    for (const [k, row] of found.entries()) {
      // The table has six digits.
      expect(Math.abs(Number(row.u_db) / design.designs[0].bands[0].units[k].u_db - 1)).toBeLessThan(1e-5);
    }
  });

  it('reads a design with seatings, repeats and forbidden pairs, and writes it back as tables', () => {
    bench.write(
      'plan.csv',
      'emitter,receiver,seatings,repeats,forbidden\nA,B,2,2,\nB,C,1,1,\nC,D,1,1,\nD,A,1,1,\nA,C,,,yes\n',
    );
    const { suggestion } = record('plan.csv', '--add', '1', '--out', 'tables');
    expect(suggestion.exhaustive).toBe(true);
    expect([suggestion.steps[0].emitter, suggestion.steps[0].receiver].sort()).toEqual(['B', 'D']);
    const design = readCsv(bench.at('tables/design.csv'));
    expect(design.find(({ emitter, receiver }) => emitter === 'A' && receiver === 'B')).toMatchObject({
      seatings: '2',
      repeats: '2',
    });
    expect(design.find(({ forbidden }) => forbidden === 'yes')).toMatchObject({ emitter: 'A', receiver: 'C' });
    expect(readCsv(bench.at('tables/design-units.csv')).map(({ status }) => status)).toEqual(['ok', 'ok', 'ok', 'ok']);
    expect(readCsv(bench.at('tables/design-takes.csv'))).toHaveLength(8);
    // What was written is a design as well.
    expect(record('tables/design.csv').designs[0].forbidden).toEqual([['A', 'C']]);
  });

  it('--out writes a page beside the tables, which says what the terminal says', () => {
    const { status, stdout } = whatif('--units', '5', '--pattern', 'all', '--order', '--out', 'tables');
    expect(status).toBe(0);
    const page = readFileSync(bench.at('tables/report.html'), 'utf8');
    const unwrapped = stdout.replace(/\s+/g, ' ');
    const sentences = [...page.matchAll(/<li class="(?:good|warning|plain)">.*?<span>(.*?)<\/span>/g)].map(
      ([, text = '']) => text,
    );
    expect(sentences).toHaveLength(3);
    for (const sentence of sentences) expect(unwrapped).toContain(sentence);
    expect(page).toContain('>Run sheet</h2>');
    expect(page).not.toContain('<script');
  });

  it('takes scatter by bands, and says where a step has no figure', () => {
    const { designs } = record('--units', '5', '--pattern', 'all', '--reseat-db', '1 kHz..2 kHz=0.2,2 kHz..4 kHz=0.6');
    expect(
      designs[0].bands.map((band: { from_hz: number; reseat_db: number }) => [band.from_hz, band.reseat_db]),
    ).toEqual([
      [1000, 0.2],
      [2000, 0.6],
    ]);
    const gap = whatif(
      '--units',
      '5',
      '--pattern',
      'all',
      '--reseat-db',
      '1kHz..2kHz=0.2',
      '--repeat-db',
      '1kHz..3kHz=0.1',
    );
    expect(gap.status).toBe(2);
    expect(gap.stderr).toContain('--reseat-db: found no figure for 2 kHz to 3 kHz');
  });

  it('is the same for the same seed', () => {
    const words = ['--units', '9', '--pattern', 'hub', '--add', '7', '--rehearse', '2', '--seed', '5', '--json'];
    expect(whatif(...words).stdout).toBe(whatif(...words).stdout);
  });

  it('rehearses a design with the real solver', () => {
    const { rehearsal } = record(
      '--units',
      '5',
      '--pattern',
      'all',
      '--seatings',
      '2',
      '--repeats',
      '2',
      '--rehearse',
      '10',
    );
    expect(rehearsal).toMatchObject({ runs: 10, planted: 10 });
    // 10 runs × 12 frequencies: 4 sampling errors of 1/√240, and what the solver has to learn.
    expect(Math.abs(rehearsal.seen_db / rehearsal.predicted_db - 1)).toBeLessThan(4 / Math.sqrt(240) + 0.05);
  });
});

describe('a run sheet', () => {
  const six = ['--units', 'N01,N02,N03,N04,N05,N06', '--budget-minutes', '240', '--sheet', 'afternoon.csv'];

  it('fits the afternoon, and is read by solve unchanged once the levels are filled in', () => {
    const { status, stdout } = whatif(...six, '--at', '1 kHz,2 kHz,4 kHz', '--control', 'N01>N02');
    expect(status).toBe(0);
    expect(stdout).toContain('oddloop solve afternoon.csv --out result');
    const sheet = readCsv(bench.at('afternoon.csv'));
    expect(sheet[0]!.level_db).toBe('');
    const level = (unit: string) => -20 - Number(unit.slice(1));
    const [header = '', ...lines] = readFileSync(bench.at('afternoon.csv'), 'utf8').trimEnd().split('\n');
    const at = header.split(',').indexOf('level_db');
    const filled = lines.map((line, k) => {
      const cells = line.split(',');
      const wobble = 0.05 * Math.sin(12.9898 * k);
      cells[at] = (level(cells[0]!) + level(cells[1]!) + wobble).toFixed(3);
      return cells.join(',');
    });
    bench.write('afternoon.csv', `${[header, ...filled].join('\n')}\n`);
    const solved = bench.run('solve', 'afternoon.csv', '--out', 'result');
    expect(solved.status).toBe(0);
    const summary = JSON.parse(readFileSync(bench.at('result/summary.json'), 'utf8'));
    expect(summary.input).toMatchObject({ readings: sheet.length, unused: 0 });
    expect(summary.notices).toEqual([]);
    const units = readCsv(bench.at('result/responses.csv'));
    expect(units).toHaveLength(6 * 3);
    for (const { unit, level_db, status: state } of units) {
      expect(state).toBe('ok');
      expect(Math.abs(Number(level_db) - level(unit!))).toBeLessThan(0.1);
    }
  });

  it('without frequencies names a file for each take, which solve reads as a bench log', () => {
    expect(whatif(...six, '--repeats', '2').status).toBe(0);
    const sheet = readCsv(bench.at('afternoon.csv'));
    expect(new Set(sheet.map(({ file }) => file)).size).toBe(sheet.length);
    for (const { file } of sheet) bench.write(file!, 'frequency_hz,level_db\n1000,-41.2\n2000,-42.1\n');
    const { status } = bench.run('solve', 'afternoon.csv', '--out', 'result');
    expect(status).toBe(0);
    const { input, counts } = JSON.parse(readFileSync(bench.at('result/summary.json'), 'utf8'));
    expect(input.unused).toBe(0);
    expect(counts).toMatchObject({ takes: sheet.length, units: 6 });
  });

  it('comes with a page that opens offline, with a box for each take and what to mount before it', () => {
    whatif(...six);
    const page = readFileSync(bench.at('afternoon.html'), 'utf8');
    const takes = readCsv(bench.at('afternoon.csv')).length;
    expect(page.match(/aria-label="box to tick"/g)).toHaveLength(takes);
    expect(page).not.toMatch(/https?:|src=|@import|url\(/);
    expect(page).toContain('mount first');
  });

  it('writes names with signs of markup as text', () => {
    whatif('--units', '<b>,A&B,C', '--pattern', 'all', '--sheet', 'odd.csv');
    const page = readFileSync(bench.at('odd.html'), 'utf8');
    expect(page).toContain('&lt;b&gt;');
    expect(page).not.toContain('<b>');
  });

  it('plans the reciprocal model with a control pair as well, whose roles say nothing of the other units', () => {
    const { designs, order } = record(...six, '--control', 'N01>N02');
    expect(designs[0].model).toBe('reciprocal');
    expect(designs[0].bands[0].units).toHaveLength(6);
    const kinds = order.seatings.map(({ kind }: { kind: string }) => kind === 'control');
    expect([kinds[0], kinds.at(-1), kinds.filter(Boolean).length]).toEqual([true, true, 3]);
  });

  it('is never written over one that may be filled in, and not half of the two files', () => {
    bench.write('afternoon.html', 'mine');
    const { status, stderr } = whatif(...six);
    expect(status).toBe(3);
    expect(stderr).toContain('afternoon.html: found a file of that name');
    expect(existsSync(bench.at('afternoon.csv'))).toBe(false);
    expect(readFileSync(bench.at('afternoon.html'), 'utf8')).toBe('mine');
  });

  it('has the same u in the end as was predicted for it, units that stay mounted counted in', () => {
    const words = ['--units', '5', '--pattern', 'all', '--seatings', '2', '--order'];
    const ordered = record(...words);
    const fresh = record('--units', '5', '--pattern', 'all', '--seatings', '2');
    expect(ordered.order.mountings).toBeLessThan(fresh.designs[0].mountings);
    expect(ordered.designs[0].bands[0].mean_u_db).toBeGreaterThan(fresh.designs[0].bands[0].mean_u_db);
  });
});

describe('trouble with a design', () => {
  it.each([
    [['--units', '1', '--pattern', 'all'], 2, 'three are the fewest'],
    [['--units', '6'], 2, '--units: found no pattern with it'],
    [['--pattern', 'all'], 2, '--pattern: found no number of units'],
    [['--units', '6', '--pattern', 'star'], 2, 'all, ring, triangles, hub or both-ways'],
    [['--units', '6', '--add', '3', '--budget-minutes', '9'], 2, 'found both'],
    [['--units', '6', '--pattern', 'all,ring', '--sheet', 'a.csv'], 2, '--sheet: found 2 designs'],
    [['--units', '6', '--pattern', 'all', '--sheet', 'a.txt'], 2, 'ends in .csv'],
    [['--units', '6', '--pattern', 'all', '--reseat-db', '-1'], 2, '--reseat-db: found "-1"'],
    [['--units', '6', '--pattern', 'all', '--order', '--fresh'], 2, '--order and --fresh'],
    [['nothing.csv'], 3, 'nothing.csv: found no such file'],
    [['--units', '6', '--budget-minutes', '30'], 3, 'expected at least 53 min'],
    [['--units', '4', '--pattern', 'all', '--forbid', 'S1>S9'], 3, 'the unit S9, which the design does not have'],
    [['--units', '4', '--pattern', 'all', '--forbid', 'S1>S2'], 3, 'planned or forbidden, not both'],
    [['--units', '4', '--add', '5', '--control', 'S1>S2', '--forbid', 'S1>S2'], 3, 'which is forbidden'],
    [['--units', '4', '--budget-minutes', '200', '--forbid', 'S1>S3,S2>S4'], 3, 'allow S1 > S3 or S2 > S4'],
    [['--units', '2', '--budget-minutes', '200'], 3, 'a third unit would'],
    [['--units', '2', '--pattern', 'all'], 4, 'three units against each other'],
    [['--units', '6', '--pattern', 'ring'], 4, 'One take would settle it: S1 > S3'],
  ])('%j ends with %d and says what would work', (words, code, said) => {
    const { status, stdout, stderr } = whatif(...words);
    expect(status).toBe(code);
    expect(stderr.replace(/\s+/g, ' ')).toContain(said);
    expect(stderr).not.toContain('    at ');
    if (code < 4) expect(stdout).toBe('');
  });

  it('a design of one unit names the smallest design that works', () => {
    bench.write('one.csv', 'emitter,receiver\nA,A\n');
    const { status, stderr } = whatif('one.csv');
    expect(status).toBe(3);
    expect(stderr).toContain('one unit, A');
    expect(stderr).toContain('--units 3 --pattern all');
  });
});

describe('after a run', () => {
  const solve = (pairs: Parameters<typeof pairsCsv>[0]) => {
    bench.write('bench.csv', pairsCsv(pairs));
    bench.run('solve', 'bench.csv', '--out', 'result', '--model', 'reciprocal');
  };

  it('whatif --from counts its takes as made, and suggests what to add', () => {
    solve(RING_WITH_DIAGONALS.slice(0, 5));
    const { designs, suggestion } = record('--from', 'result', '--add', '1');
    expect(designs[0].seatings.every((s: { kind: string }) => s.kind === 'made')).toBe(true);
    expect(designs[0].minutes).toBe(0);
    expect([suggestion.steps[0].emitter, suggestion.steps[0].receiver].sort()).toEqual(['N02', 'N04']);
  });

  it('next names the take that closes what is open, and what it buys', () => {
    solve(RING_WITH_DIAGONALS.slice(0, 4));
    const { status, stdout } = bench.run('next', 'result');
    expect(status).toBe(0);
    expect(stdout).toContain('N01 > N03');
    expect(stdout).toContain('gives N01, N02, N03 and N04 a level');
    expect(narrow(stdout)).toBe(true);
    const next = JSON.parse(bench.run('next', 'result', '--json').stdout);
    expect(next.takes[0]).toMatchObject({ purpose: 'close', closes: 4 });
  });

  it('next says so where nothing calls for another take', () => {
    solve(RING_WITH_DIAGONALS);
    expect(bench.run('next', 'result').stdout).toContain('calls for another take');
  });

  it.each([
    [['next'], 2, 'missing required argument'],
    [['next', 'result', '--target-db', '0'], 2, '--target-db: found "0"'],
    [['next', 'nowhere'], 3, 'nowhere'],
  ])('%j ends with %d', (words, code, said) => {
    const { status, stderr } = bench.run(...words);
    expect(status).toBe(code);
    expect(stderr).toContain(said);
    expect(stderr).not.toContain('    at ');
  });
});
