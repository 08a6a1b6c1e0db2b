import {
  chmodSync,
  existsSync,
  mkdirSync,
  mkdtempSync,
  readdirSync,
  readFileSync,
  realpathSync,
  rmSync,
  statSync,
  symlinkSync,
  writeFileSync,
} from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { type OutputFolderOptions, openOutputFolder } from '../../src/cli/output-folder.ts';
import { InputError } from '../../src/quantity/input-fault.ts';
import type { OutputFile } from '../../src/report/result.ts';

let room: string;
beforeEach(() => {
  room = realpathSync(mkdtempSync(join(tmpdir(), 'oddloop-test-')));
});
afterEach(() => rmSync(room, { recursive: true, force: true }));

const OPTIONS: OutputFolderOptions = { replaceResult: true, inputs: [] };
const SUMMARY = '{"schema":"oddloop-summary/1"}';

const fileOf = (name: string, ...chunks: string[]): OutputFile => ({ name, chunks: () => chunks });
const FILES = [fileOf('responses.csv', 'unit\n', 'N01\n'), fileOf('summary.json', SUMMARY)];

async function earlierResult(name = 'result'): Promise<string> {
  const path = join(room, name);
  await (await openOutputFolder(path, OPTIONS)).write([fileOf('takes.csv', 'old'), fileOf('summary.json', SUMMARY)]);
  return path;
}

async function faultOf(work: Promise<unknown>): Promise<string> {
  const error: unknown = await work.then(
    () => undefined,
    (reason: unknown) => reason,
  );
  expect(error).toBeInstanceOf(InputError);
  return (error as InputError).message;
}

/** The superuser may write anywhere; for one call the process is nobody in particular. */
async function asNobody<Value>(act: () => Promise<Value>): Promise<Value> {
  if (process.geteuid?.() !== 0) return act();
  process.seteuid?.(65_534);
  try {
    return await act();
  } finally {
    process.seteuid?.(0);
  }
}

/** What a disk says that has no space left, in the middle of the second file. */
function fullDisk(): OutputFolderOptions {
  let files = 0;
  return {
    ...OPTIONS,
    writeFile: async (path, text) => {
      writeFileSync(path, [...text].join('').slice(0, 3));
      files++;
      if (files < 2) return;
      throw Object.assign(new Error('ENOSPC: no space left on device, write'), { code: 'ENOSPC', syscall: 'write' });
    },
  };
}

describe('openOutputFolder', () => {
  it('leaves nothing behind before anything is written', async () => {
    await openOutputFolder(join(room, 'result'), OPTIONS);
    expect(readdirSync(room)).toEqual([]);
  });

  it('writes every chunk of every file, large ones as well, and nothing else', async () => {
    const row = `${'x'.repeat(99)}\n`;
    const path = join(room, 'result');
    const heard: string[] = [];
    const folder = await openOutputFolder(path, OPTIONS);
    await folder.write([...FILES, fileOf('residuals.csv', ...new Array<string>(3000).fill(row))], (name) =>
      heard.push(name),
    );
    expect(readFileSync(join(path, 'responses.csv'), 'utf8')).toBe('unit\nN01\n');
    expect(readFileSync(join(path, 'residuals.csv'), 'utf8')).toBe(row.repeat(3000));
    expect(heard).toEqual(['responses.csv', 'summary.json', 'residuals.csv']);
    expect(readdirSync(room)).toEqual(['result']);
  });

  it('gives the folder the rights that any new folder has', async () => {
    const path = await earlierResult();
    mkdirSync(join(room, 'usual'));
    expect(statSync(path).mode).toBe(statSync(join(room, 'usual')).mode);
  });

  it('replaces an earlier result as a whole, with its rights', async () => {
    const path = await earlierResult();
    chmodSync(path, 0o710);
    const { mode } = statSync(path);
    await (await openOutputFolder(path, OPTIONS)).write(FILES);
    expect(readdirSync(path).sort()).toEqual(['responses.csv', 'summary.json']);
    expect(statSync(path).mode).toBe(mode);
    expect(readdirSync(room)).toEqual(['result']);
  });

  it('fills an empty folder', async () => {
    mkdirSync(join(room, 'empty'));
    await (await openOutputFolder(join(room, 'empty'), OPTIONS)).write(FILES);
    expect(readdirSync(join(room, 'empty'))).toHaveLength(2);
  });

  it('replaces the folder that a symbolic link leads to, and keeps the link', async () => {
    const path = await earlierResult();
    symlinkSync(path, join(room, 'latest'));
    await (await openOutputFolder(join(room, 'latest'), OPTIONS)).write(FILES);
    expect(realpathSync(join(room, 'latest'))).toBe(path);
    expect(existsSync(join(path, 'responses.csv'))).toBe(true);
  });

  it.each([
    ['a file that oddloop does not write', (path: string) => writeFileSync(join(path, 'notes.txt'), ''), 'notes.txt'],
    ['a folder with a known name', (path: string) => mkdirSync(join(path, 'pairs.csv')), 'pairs.csv'],
    [
      'the summary of another program',
      (path: string) => writeFileSync(join(path, 'summary.json'), '{"schema":"x/1"}'),
      'summary.json',
    ],
    [
      'a summary that is no JSON',
      (path: string) => writeFileSync(join(path, 'summary.json'), 'oddloop-summary/1'),
      'summary.json',
    ],
    ['no summary', (path: string) => rmSync(join(path, 'summary.json')), 'summary.json'],
  ])('does not touch a folder with %s', async (_, spoil, named) => {
    const path = await earlierResult();
    spoil(path);
    const before = readdirSync(path);
    expect(await faultOf(openOutputFolder(path, OPTIONS))).toContain(named);
    expect(readdirSync(path)).toEqual(before);
    expect(readdirSync(room)).toEqual(['result']);
  });

  it('looks again before it replaces: what came into the folder during the work is not lost', async () => {
    const path = await earlierResult();
    const folder = await openOutputFolder(path, OPTIONS);
    writeFileSync(join(path, 'notes.txt'), 'mine');
    expect(await faultOf(folder.write(FILES))).toContain('notes.txt');
    expect(readFileSync(join(path, 'notes.txt'), 'utf8')).toBe('mine');
    expect(readdirSync(room)).toEqual(['result']);
  });

  it('does not replace a result where that is not asked for', async () => {
    const path = await earlierResult();
    expect(await faultOf(openOutputFolder(path, { ...OPTIONS, replaceResult: false }))).toContain('an earlier result');
  });

  it('refuses a folder that holds an input file, though the file has a name of ours', async () => {
    const path = await earlierResult();
    const input = join(path, 'pairs.csv');
    writeFileSync(input, 'emitter,receiver');
    expect(await faultOf(openOutputFolder(path, { ...OPTIONS, inputs: [input] }))).toContain(
      'the input file pairs.csv',
    );
    expect(readFileSync(input, 'utf8')).toBe('emitter,receiver');
  });

  it('refuses the folder that the run stands in', async () => {
    expect(await faultOf(openOutputFolder('.', OPTIONS))).toContain('the folder that you are in');
    expect(await faultOf(openOutputFolder('..', OPTIONS))).toContain('the folder that you are in');
  });

  it.each([
    ['the parent is missing', 'no/result', 'to put it in'],
    ['a file has that name', 'file', 'a file of that name'],
    ['a file is on the way', 'file/result', 'a file where a folder is due'],
    ['the link leads nowhere', 'dangling', 'nothing of that name'],
    ['the name is too long', 'n'.repeat(300), 'a name that is too long'],
  ])('says at once where %s', async (_, name, found) => {
    writeFileSync(join(room, 'file'), 'kept');
    symlinkSync(join(room, 'nowhere', 'at-all'), join(room, 'dangling'));
    expect(await faultOf(openOutputFolder(join(room, name), OPTIONS))).toContain(found);
    expect(readdirSync(room).sort()).toEqual(['dangling', 'file']);
    expect(readFileSync(join(room, 'file'), 'utf8')).toBe('kept');
  });

  it('says at once where there is no permission', async () => {
    mkdirSync(join(room, 'locked'), { mode: 0o555 });
    const message = await asNobody(() => faultOf(openOutputFolder(join(room, 'locked', 'result'), OPTIONS)));
    expect(message).toContain('no permission');
  });

  it('does not replace an earlier result that was made read-only', async () => {
    const path = await earlierResult();
    chmodSync(path, 0o555);
    expect(await faultOf(openOutputFolder(path, OPTIONS))).toContain('an earlier result that is read-only');
    expect(readdirSync(room)).toEqual(['result']);
    chmodSync(path, 0o755);
  });

  it('a full disk leaves nothing half-written', async () => {
    const folder = await openOutputFolder(join(room, 'result'), fullDisk());
    expect(await faultOf(folder.write(FILES))).toContain('no space left on the disk');
    expect(readdirSync(room)).toEqual([]);
  });

  it('a full disk leaves the earlier result as it was', async () => {
    const path = await earlierResult();
    const folder = await openOutputFolder(path, fullDisk());
    await faultOf(folder.write(FILES));
    expect(readFileSync(join(path, 'takes.csv'), 'utf8')).toBe('old');
    expect(readdirSync(room)).toEqual(['result']);
  });

  it('a defect in making a text is not told as a trouble of the disk, and leaves nothing either', async () => {
    const folder = await openOutputFolder(join(room, 'result'), OPTIONS);
    const broken: OutputFile = {
      name: 'takes.csv',
      chunks: () => {
        throw new TypeError('ours');
      },
    };
    await expect(folder.write([FILES[0]!, broken])).rejects.toThrow(TypeError);
    expect(readdirSync(room)).toEqual([]);
  });

  it('replaces a result with pictures, and refuses where anything else lies among them', async () => {
    const path = join(room, 'result');
    const picture = fileOf('figures/network.svg', '<svg/>');
    await (await openOutputFolder(path, OPTIONS)).write([...FILES, picture]);
    expect(readFileSync(join(path, 'figures/network.svg'), 'utf8')).toBe('<svg/>');
    await (await openOutputFolder(path, OPTIONS)).write(FILES);
    expect(existsSync(join(path, 'figures'))).toBe(false);
    await (await openOutputFolder(path, OPTIONS)).write([...FILES, picture]);
    writeFileSync(join(path, 'figures', 'mine.txt'), 'mine');
    expect(await faultOf(openOutputFolder(path, OPTIONS))).toContain('a folder with other things in it (figures)');
    expect(readFileSync(join(path, 'figures/mine.txt'), 'utf8')).toBe('mine');
  });
});
