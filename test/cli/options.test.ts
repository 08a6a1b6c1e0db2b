import { Command } from 'commander';
import { describe, expect, it } from 'vitest';
import { addShapingOptions, type Request, readRequest } from '../../src/cli/options.ts';
import { UsageError } from '../../src/cli/usage-error.ts';

function requestFrom(...words: string[]): Request {
  let request: Request | undefined;
  addShapingOptions(new Command('solve'))
    .option('--out <DIR>')
    .option('--quiet')
    .exitOverride()
    .action((files: string[], values: Record<string, unknown>) => {
      request = readRequest(files, values, { writes: true, name: 'solve' });
    })
    .parse(words, { from: 'user' });
  return request as Request;
}

function troublesOf(...words: string[]): readonly string[] {
  try {
    requestFrom(...words);
  } catch (error) {
    if (error instanceof UsageError) return error.troubles;
    throw error;
  }
  return [];
}

describe('readRequest', () => {
  it('holds only what was named, so that a settings file can fill the rest', () => {
    expect(requestFrom('bench.csv', '--out', 'result')).toEqual({
      given: { files: ['bench.csv'] },
      settingsFile: undefined,
      out: 'result',
      json: false,
      strict: false,
      quiet: false,
    });
  });

  it('reads every option that shapes a result', () => {
    const words = [
      'a.csv',
      'b.csv',
      '--out',
      'r',
      '--model',
      'reciprocal',
      '--datum',
      'balanced',
      '--reversible',
      'A,B',
    ];
    words.push('--refs', 'c.csv', '--path', 'none', '--lookalikes', 'A=B', '--lookalikes', 'C=D=E', '--loose-gain');
    words.push(
      '--level',
      '20*log10(a)',
      '--u',
      '0.3',
      '--band',
      '2 kHz..80 kHz',
      '--grid',
      '1/12',
      '--coverage',
      '0.9',
    );
    expect(requestFrom(...words).given).toEqual({
      files: ['a.csv', 'b.csv'],
      model: 'reciprocal',
      datum: 'balanced',
      reversible: ['A', 'B'],
      refs: 'c.csv',
      path: 'none',
      lookalikes: [
        ['A', 'B'],
        ['C', 'D', 'E'],
      ],
      'loose-gain': true,
      level: '20*log10(a)',
      u: 0.3,
      band: '2 kHz..80 kHz',
      grid: '1/12',
      coverage: 0.9,
    });
  });

  it('takes a formula that begins with a minus sign, and --reversible more than once', () => {
    const { given } = requestFrom(
      'a.csv',
      '--out',
      'r',
      '--level',
      '-loss_db',
      '--reversible',
      'A',
      '--reversible',
      'B,C',
    );
    expect(given).toMatchObject({ level: '-loss_db', reversible: ['A', 'B', 'C'] });
  });

  it('takes file names with a leading dash after --', () => {
    expect(requestFrom('--out', 'r', '--', '-odd.csv').given.files).toEqual(['-odd.csv']);
  });

  it('tells everything that is wrong at once, each with what was found and an example', () => {
    const troubles = troublesOf('--u', '0,3', '--grid', '1/5');
    expect(troubles.map((trouble) => trouble.slice(0, trouble.indexOf(':')))).toEqual([
      '--u',
      '--grid',
      '--out',
      'FILE',
    ]);
    expect(troubles[0]).toBe(
      '--u: found "0,3"; expected a standard uncertainty from 0.000001 to 1000 dB. Example: --u 0.3',
    );
    for (const trouble of troubles) expect(trouble).toMatch(/found .*; expected .*Example: /);
  });

  it('does not take an option for the name of a folder', () => {
    expect(troublesOf('a.csv', '--out', '--json')[0]).toMatch(/^--out: found "--json"/);
  });

  it('needs no file where settings may name them', () => {
    expect(requestFrom('--settings', 'r/summary.json', '--out', 'again')).toMatchObject({
      given: {},
      settingsFile: 'r/summary.json',
    });
  });
});
