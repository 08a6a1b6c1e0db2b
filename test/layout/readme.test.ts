import {
  chmodSync,
  mkdirSync,
  mkdtempSync,
  readdirSync,
  readFileSync,
  realpathSync,
  rmSync,
  writeFileSync,
} from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterAll, beforeAll, expect, test } from 'vitest';
import { EXIT } from '../../src/cli/exit-codes.ts';
import { programPath, runCommand } from '../command/run-oddloop.ts';
import { textOf } from './project-files.ts';

const README = textOf('README.md');
const LINES = README.trimEnd().split('\n');
const MOST_LINES = 200;

interface Fence {
  readonly language: string;
  /** What stands behind the language; the name of the file where it shows one. */
  readonly name: string;
  readonly text: string;
}

const FENCES: readonly Fence[] = [...README.matchAll(/^```(\w*) ?(.*)\n([\s\S]*?)^```$/gm)].map((match) => ({
  language: match[1]!,
  name: match[2]!,
  text: match[3]!,
}));
const COMMANDS = FENCES.filter(({ language }) => language === 'sh').flatMap(({ text }) => text.trimEnd().split('\n'));
const EXAMPLES = COMMANDS.filter((line) => line.startsWith('oddloop '));

/** Files and their columns as the README's table of outputs has them; no columns for what is no table. */
const OUTPUTS = new Map(
  [...README.matchAll(/^\| `([\w.]+\.(?:csv|json|html)|figures)\/?` +\|[^|]*\| (.*?) *\|$/gm)].map((match) => [
    match[1]!,
    match[2]!,
  ]),
);

let folder = '';
beforeAll(() => {
  folder = realpathSync(mkdtempSync(join(tmpdir(), 'oddloop-readme-')));
  for (const { language, name, text } of FENCES) if (language === 'csv') writeFileSync(join(folder, name), text);
  // The program under the name that the examples call it by.
  mkdirSync(join(folder, 'path'));
  const program = join(folder, 'path', 'oddloop');
  writeFileSync(program, `#!/bin/sh\nexec '${process.execPath}' '${programPath()}' "$@"\n`);
  chmodSync(program, 0o755);
});
afterAll(() => rmSync(folder, { recursive: true, force: true }));

test('the README is short, says what the program is for before anything else, and then gives two commands', () => {
  expect(LINES.length).toBeLessThanOrEqual(MOST_LINES);
  const [title, job] = README.split('\n\n');
  expect(title).toBe('# oddloop');
  expect(job).toMatch(/^[A-Z]/);
  expect(README.split('\n\n')[2]).toBe('```sh\nnpm ci && npm run demo\nnpm ci && npm test\n```');
});

test('the scripts that the README calls are there', () => {
  const { scripts } = JSON.parse(textOf('package.json')) as { scripts: Record<string, string> };
  expect(Object.keys(scripts)).toEqual(expect.arrayContaining(['demo', 'test']));
});

test('every example of the README runs as it is written, one after the other', async () => {
  expect(EXAMPLES.length).toBeGreaterThanOrEqual(8);
  for (const example of EXAMPLES) {
    const path = `${join(folder, 'path')}:${process.env.PATH}`;
    const outcome = await runCommand('/bin/sh', ['-c', `PATH='${path}'; ${example}`], { cwd: folder });
    expect(outcome.code, example).toBe(0);
    // Only `compare` prints its answer and writes a file as well, and says on stderr where.
    const said = example.includes(' compare ') ? 'Written to result/differences.csv.\n' : '';
    expect(outcome.stderr, example).toBe(said);
    const out = /--out (\w+)/.exec(example)?.[1];
    if (out === undefined) continue;
    expect(readdirSync(join(folder, out)).sort(), example).toEqual([...OUTPUTS.keys()].sort());
    const responses = readFileSync(join(folder, out, 'responses.csv'), 'utf8')
      .trimEnd()
      .split('\n')
      .slice(1);
    expect(
      responses.every((row) => !row.endsWith(',open')),
      example,
    ).toBe(true);
    expect(
      readFileSync(join(folder, out, 'unused.csv'), 'utf8')
        .trimEnd()
        .split('\n').length,
      example,
    ).toBe(1);
  }
});

test('the table of outputs names the columns that the files have', () => {
  for (const [name, columns] of OUTPUTS) {
    if (!name.endsWith('.csv')) continue;
    const header = readFileSync(join(folder, 'result', name), 'utf8').split('\n')[0];
    expect(columns, name).toBe(`\`${header}\``);
  }
});

test('the level that the README works out by hand is the one that the program writes', () => {
  const [, sum, level] = /H1 at 250 Hz is (\(.*\) \/ 2) = (\S+) dB/.exec(README)!;
  const numbers = (text: string) =>
    [...text.replaceAll('−', '-').matchAll(/(-? ?[\d.]+)/g)].map((match) => Number(match[1]!.replace(' ', '')));
  const [first, second, third, two] = numbers(sum!);
  const byHand = (first! + second! + third!) / two!;
  const row = readFileSync(join(folder, 'result', 'responses.csv'), 'utf8')
    .split('\n')
    .find((line) => line.startsWith('H1,,both,250,'));
  // The table has six decimals.
  expect(Math.abs(Number(row?.split(',')[4]) - byHand)).toBeLessThan(1e-6);
  expect(Math.abs(numbers(level!)[0]! - byHand)).toBeLessThan(1e-12);
});

test('the README names the exit codes that the program has, and no others', () => {
  const sentence = /Exit codes: ([\s\S]*?)\./.exec(README)![1]!;
  const named = [...sentence.matchAll(/(?:^|,\s)(\d+) /g)].map((match) => Number(match[1]));
  expect(named).toEqual(Object.values(EXIT).sort((a, b) => a - b));
});

test('files that the README points to exist', () => {
  const links = [...README.matchAll(/\]\(([^)#]+)\)/g)].map((match) => match[1]!);
  expect(links).toContain('DEVELOPERS.md');
  for (const link of links) expect(textOf(link).length).toBeGreaterThan(0);
});
