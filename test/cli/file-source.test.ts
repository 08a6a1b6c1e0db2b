import { mkdirSync, mkdtempSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterAll, beforeAll, describe, expect, test } from 'vitest';
import { fileSource } from '../../src/cli/file-source.ts';
import type { Source } from '../../src/readings/source.ts';
import { faultsOf } from '../readings/memory-source.ts';

let folder = '';
beforeAll(() => {
  folder = mkdtempSync(join(tmpdir(), 'oddloop-'));
  mkdirSync(join(folder, 'run'));
  writeFileSync(join(folder, 'log.csv'), 'file\n');
  writeFileSync(join(folder, 'run', 'ab.csv'), 'x'.repeat(600_000));
});
afterAll(() => rmSync(folder, { recursive: true }));

async function lengthOf(source: Source) {
  let length = 0;
  for await (const piece of source.open()) length += piece.length;
  return length;
}

describe('files on disk', () => {
  test('a file is read in pieces, any number of times', async () => {
    const source = await fileSource(join(folder, 'run', 'ab.csv'));
    expect(source.bytes).toBe(600_000);
    expect(await lengthOf(source)).toBe(600_000);
    expect(await lengthOf(source)).toBe(600_000);
  });

  test('a file that another names is found beside it, whichever stroke its path has', async () => {
    const log = await fileSource(join(folder, 'log.csv'));
    for (const path of ['run/ab.csv', 'run\\ab.csv', './run/ab.csv', join(folder, 'run/ab.csv')]) {
      const source = log.sibling(path);
      expect(source.name).toBe(join(folder, 'run', 'ab.csv'));
      expect(await lengthOf(source)).toBe(600_000);
    }
  });

  test('a missing file and a folder are faults that say so', async () => {
    const [missing] = await faultsOf(fileSource(join(folder, 'nowhere.csv')));
    expect(missing).toMatchObject({ place: { file: join(folder, 'nowhere.csv') }, found: 'no such file' });
    const [dir] = await faultsOf(fileSource(folder));
    expect(dir!.found).toBe('a folder');
    const [below] = await faultsOf(fileSource(join(folder, 'log.csv', 'x.csv')));
    expect(below!.found).toBe('no such file');
  });

  test('a missing or unreadable file beside another is a fault when it is opened', async () => {
    const log = await fileSource(join(folder, 'log.csv'));
    expect((await faultsOf(lengthOf(log.sibling('nowhere.csv'))))[0]!.found).toBe('no such file');
    expect((await faultsOf(lengthOf(log.sibling('run'))))[0]!.found).toBe('a folder');
  });
});
