import { describe, expect, test } from 'vitest';
import { readPathLevels } from '../../src/readings/read-path-levels.ts';
import { faultsOf, memorySource } from './memory-source.ts';

const read = (text: string) => readPathLevels(memorySource('paths.csv', text));

describe('path levels', () => {
  test('rows of a path belong together; a blank u_db makes the level exact', async () => {
    expect(await read('path,frequency_hz,level_db,u_db\nwater,2000,-2,0.1\nblock,1000,0,\nwater,1000,-1,\n')).toEqual([
      {
        path: 'water',
        frequency: Float64Array.of(1000, 2000),
        level: Float64Array.of(-1, -2),
        uncertainty: Float64Array.of(Number.NaN, 0.1),
      },
      {
        path: 'block',
        frequency: Float64Array.of(1000),
        level: Float64Array.of(0),
        uncertainty: Float64Array.of(Number.NaN),
      },
    ]);
  });

  test('u_db may be left out altogether', async () => {
    const [path] = await read('path,frequency_hz,level_db\nwater,1000,-1\n');
    expect(path!.uncertainty).toEqual(Float64Array.of(Number.NaN));
  });

  test.each([
    ['u of 0', 'water,1000,-1,0', 'u_db'],
    ['a negative u', 'water,1000,-1,-0.1', 'u_db'],
    ['text for u', 'water,1000,-1,small', 'u_db'],
    ['no path', ',1000,-1,0.1', 'path'],
    ['a blank level', 'water,1000,,0.1', 'level_db'],
    ['a negative frequency', 'water,-1,-1,0.1', 'frequency_hz'],
  ])('%s is a fault', async (_, row, column) => {
    const faults = await faultsOf(read(`path,frequency_hz,level_db,u_db\n${row}\n`));
    expect(faults.map(({ place }) => place)).toEqual([{ file: 'paths.csv', line: 2, column }]);
  });

  test('a missing column is a fault with an example', async () => {
    const [fault] = await faultsOf(read('path,level_db\nwater,1\n'));
    expect(fault!.expected).toMatch(/path,frequency_hz,level_db/);
  });
});
