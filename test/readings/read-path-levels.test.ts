import { describe, expect, test } from 'vitest';
import { readPathLevels } from '../../src/readings/read-path-levels.ts';
import { faultsOf, memorySource } from './memory-source.ts';

const read = (text: string) => readPathLevels(memorySource('paths.csv', text));

describe('path levels', () => {
  test('rows of a path belong together; a blank u_db makes the level exact', async () => {
    const { levels, file, notices } = await read(
      'path,frequency_hz,level_db,u_db\nwater,2000,-2,0.1\nblock,1000,0,\nwater,1000,-1,0.2\n',
    );
    expect(file).toMatchObject({ name: 'paths.csv', layout: 'path levels', rows: 3 });
    expect(file.sha256).toMatch(/^[0-9a-f]{64}$/);
    expect(notices).toEqual([]);
    expect(levels).toEqual([
      {
        path: 'water',
        place: { file: 'paths.csv', line: 2 },
        frequency: Float64Array.of(1000, 2000),
        level: Float64Array.of(-1, -2),
        uncertainty: Float64Array.of(0.2, 0.1),
      },
      {
        path: 'block',
        place: { file: 'paths.csv', line: 3 },
        frequency: Float64Array.of(1000),
        level: Float64Array.of(0),
        uncertainty: Float64Array.of(Number.NaN),
      },
    ]);
  });

  test('u_db may be left out altogether', async () => {
    const { levels } = await read('path,frequency_hz,level_db\nwater,1000,-1\n');
    expect(levels[0]!.uncertainty).toEqual(Float64Array.of(Number.NaN));
  });

  test.each([
    ['water,1000,-1,0.1\nblock,1000,0,\nwater,2000,-2,\nwater,3000,-2,', 'no u_db', 'has one in line 2'],
    ['water,1000,-1,\nblock,1000,0,\nwater,2000,-2,0.1\nwater,3000,-2,', 'a u_db', 'has none in line 2'],
  ])('an uncertainty in some rows of a path and not in others is one fault', async (rows, here, there) => {
    const faults = await faultsOf(read(`path,frequency_hz,level_db,u_db\n${rows}\n`));
    expect(faults.map(({ place }) => place)).toEqual([{ file: 'paths.csv', line: 4, column: 'u_db' }]);
    expect(faults[0]!.found).toBe(`${here} for the path water, which ${there}`);
  });

  test('an unknown column is left out with a notice', async () => {
    const { notices } = await read('path,frequency_hz,level_db,weather\nwater,1000,-1,fair\n');
    expect(notices).toEqual(['paths.csv: the column `weather` is not known here and is kept out.']);
  });

  test.each([
    ['u of 0', 'water,1000,-1,0', 'u_db'],
    ['a negative u', 'water,1000,-1,-0.1', 'u_db'],
    ['text for u', 'water,1000,-1,small', 'u_db'],
    ['a u beyond anything physical', 'water,1000,-1,1e300', 'u_db'],
    ['a level beyond anything physical', 'water,1000,-1e300,0.1', 'level_db'],
    ['a frequency beyond anything physical', 'water,1e300,-1,0.1', 'frequency_hz'],
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
