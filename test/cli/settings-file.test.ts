import { mkdtempSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterAll, describe, expect, it } from 'vitest';
import { changedFiles, settingsOf } from '../../src/cli/inputs.ts';
import { DEFAULT_SETTINGS } from '../../src/cli/settings.ts';
import { readSettingsFile } from '../../src/cli/settings-file.ts';
import { InputError } from '../../src/quantity/input-fault.ts';

const folder = mkdtempSync(join(tmpdir(), 'oddloop-test-'));
afterAll(() => rmSync(folder, { recursive: true }));

function fileWith(value: unknown): string {
  const path = join(folder, 'settings.json');
  writeFileSync(path, typeof value === 'string' ? value : JSON.stringify(value));
  return path;
}

async function faultsOf(path: string): Promise<string> {
  const error: unknown = await readSettingsFile(path).catch((reason: unknown) => reason);
  expect(error).toBeInstanceOf(InputError);
  return (error as InputError).message;
}

describe('readSettingsFile', () => {
  it('reads the settings of a summary, and a bare list of settings, also with a byte-order mark', async () => {
    const settings = { model: 'reciprocal', u: 0.3 };
    const summary = { schema: 'oddloop-summary/1', version: '9', settings };
    expect((await readSettingsFile(fileWith(summary))).settings).toEqual(settings);
    expect((await readSettingsFile(fileWith(`\uFEFF${JSON.stringify(settings)}`))).settings).toEqual(settings);
  });

  it('tells every setting that cannot be used, with the file and the name', async () => {
    const path = fileWith({ model: 'best', u: -1, tolerence: 2 });
    const message = await faultsOf(path);
    for (const name of ['model', 'u', 'tolerence']) expect(message).toContain(`${path} ${name}: found`);
  });

  it.each([
    ['no JSON', '{"model":'],
    ['JSON without names in it', '[1]'],
    ['JSON without names in it', 'null'],
    ['no settings in it', '{"schema":"oddloop-summary/1"}'],
  ])('refuses a file with %s', async (found, text) => {
    expect(await faultsOf(fileWith(text))).toContain(found);
  });

  it('says so where the file is missing or a folder', async () => {
    expect(await faultsOf(join(folder, 'none.json'))).toContain('nothing of that name');
    expect(await faultsOf(folder)).toContain('found a folder');
  });
});

describe('settingsOf', () => {
  const request = { settingsFile: undefined, out: undefined, json: false, strict: false, quiet: false };

  it('takes the command line before the settings file, and that before the defaults', async () => {
    const settingsFile = fileWith({ files: ['a.csv'], model: 'reciprocal', u: 0.3, reversible: ['A'] });
    const { settings } = await settingsOf({ ...request, settingsFile, given: { u: 0.5, reversible: [] } });
    expect(settings).toEqual({ ...DEFAULT_SETTINGS, files: ['a.csv'], model: 'reciprocal', u: 0.5, reversible: [] });
  });

  it('takes the files of the settings only where none are named', async () => {
    const settingsFile = fileWith({ files: ['a.csv'] });
    expect((await settingsOf({ ...request, settingsFile, given: { files: ['b.csv'] } })).settings.files).toEqual([
      'b.csv',
    ]);
  });

  it('stops where nobody names a file', async () => {
    await expect(settingsOf({ ...request, settingsFile: fileWith({ u: 1 }), given: {} })).rejects.toThrow(
      'no input file',
    );
  });
});

describe('changedFiles', () => {
  const input = {
    files: [
      { name: 'a.csv', layout: 'long', sha256: 'aa', bytes: 1, rows: 1 },
      { name: 'b.csv', layout: 'references', sha256: 'bb', bytes: 1, rows: 1 },
    ],
  } as const;

  it('names the files whose bytes differ from those of the run that is repeated', () => {
    const sha256 = new Map([
      ['a.csv', 'aa'],
      ['b.csv', 'b0'],
    ]);
    expect(changedFiles(input, { settings: {}, sha256 }).map((sentence) => sentence.slice(0, 5))).toEqual(['b.csv']);
  });

  it('says nothing of files that the earlier run did not have', () => {
    expect(changedFiles(input, { settings: {}, sha256: new Map() })).toEqual([]);
    expect(changedFiles(input, undefined)).toEqual([]);
  });
});
