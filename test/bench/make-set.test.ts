import { mkdtempSync, readFileSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterAll, expect, test } from 'vitest';
import { writeBenchSet } from './make-set.ts';

const folder = mkdtempSync(join(tmpdir(), 'oddloop-bench-test-'));
afterAll(() => rmSync(folder, { recursive: true }));

test('the bench set holds every pair in two seatings, and the same bytes every time', async () => {
  const [first, second] = [join(folder, 'first.csv'), join(folder, 'second.csv')];
  const made = await writeBenchSet(first, { scale: 0.02, units: 4 });
  await writeBenchSet(second, { scale: 0.02, units: 4 });
  expect(made).toEqual({ takes: 12, frequencies: 20, readings: 240 });
  const text = readFileSync(first, 'utf8');
  expect(readFileSync(second, 'utf8') === text).toBe(true);

  const [header, ...rows] = text.trimEnd().split('\n');
  expect(header).toBe('emitter,receiver,emitter_seating,receiver_seating,frequency_hz,level_db,u_db');
  expect(rows.length).toBe(240);
  const cells = rows.map((row) => row.split(','));
  expect(new Set(cells.map((row) => row.slice(0, 2).join())).size).toBe(6);
  expect(new Set(cells.map((row) => row.slice(0, 4).join())).size).toBe(12);
  expect(new Set(cells.map((row) => row[4])).size).toBe(20);
  for (const row of cells) expect(Number(row[6])).toBeGreaterThanOrEqual(0.05);
});
