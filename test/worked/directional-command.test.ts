/** The directional model by hand, in integers: level = emit of one + receive of the other, one constant open per part. */
import { describe, expect, test } from 'vitest';
import { misses, type Reading, type Solved, solveReadings } from '../command/solve-folder.ts';

const DIRECTIONAL = ['--model', 'directional'] as const;

const TWO_BY_TWO: readonly Reading[] = [
  ['P', 'X', 10],
  ['P', 'Y', 12],
  ['Q', 'X', 7],
  ['Q', 'Y', 9],
];

/** Level by "unit role". */
const levels = (solved: Solved) => (name: string) => {
  const [unit, role] = name.split(' ');
  return solved.level(unit!, { role: role! });
};

const statuses = (solved: Solved) => [...new Set(solved.rows('responses.csv').map((row) => row.status))];

describe('two projectors, two receivers', () => {
  test('no unit has both roles, so the mean receive is 0: 11, 8 and -1, +1, resting on the datum', async () => {
    const solved = await solveReadings(TWO_BY_TWO, DIRECTIONAL);
    expect(misses(levels(solved), { 'P emit': 11, 'Q emit': 8, 'X receive': -1, 'Y receive': 1 })).toEqual([]);
    expect(statuses(solved)).toEqual(['datum']);
    expect(solved.text('summary.json')).toMatch(/datum/);
  });

  test('a reference for one receiver shifts every receive up and every emit down by the same 4 dB', async () => {
    const solved = await solveReadings(TWO_BY_TWO, [...DIRECTIONAL, '--refs', 'refs.csv'], {
      'refs.csv': 'unit,role,frequency_hz,level_db,u_db\nX,receive,1000,3,0.1\n',
    });
    expect(misses(levels(solved), { 'P emit': 7, 'Q emit': 4, 'X receive': 3, 'Y receive': 5 })).toEqual([]);
    expect(statuses(solved)).toEqual(['ok']);
  });

  test('an expanded uncertainty with its k is the same certificate', async () => {
    const solved = await solveReadings(TWO_BY_TWO, [...DIRECTIONAL, '--u', '0.3', '--refs', 'refs.csv'], {
      'refs.csv': 'unit,role,frequency_hz,level_db,expanded_db,k\nX,receive,1000,3,0.2,2\n',
    });
    expect(misses(levels(solved), { 'P emit': 7, 'X receive': 3 })).toEqual([]);
    expect(Number(solved.response('X', { role: 'receive' }).u_db)).toBeCloseTo(0.1, 6);
  });

  test('a certificate between two of its frequencies is interpolated, outside them never used', async () => {
    const at = (frequency_hz: number): Reading[] =>
      TWO_BY_TWO.map(([emitter, receiver, level]) => [emitter, receiver, level, { frequency_hz }]);
    const solved = await solveReadings([...at(1000), ...at(4000)], [...DIRECTIONAL, '--refs', 'refs.csv'], {
      'refs.csv': 'unit,role,frequency_hz,level_db,u_db\nX,receive,500,3,0.1\nX,receive,2000,3,0.1\n',
    });
    expect(solved.level('Y', { role: 'receive', frequency: 1000 })).toBeCloseTo(5, 6);
    expect(solved.response('Y', { role: 'receive', frequency: 4000 }).status).toBe('datum');
    expect(solved.level('Y', { role: 'receive', frequency: 4000 })).toBeCloseTo(1, 6);
  });
});

describe('three units, all six directions', () => {
  test('mean(emit - receive) = 0 where units have both roles: 5, 3, 1 and 1, 3, 5', async () => {
    const solved = await solveReadings(
      [
        ['A', 'B', 8],
        ['A', 'C', 10],
        ['B', 'A', 4],
        ['B', 'C', 8],
        ['C', 'A', 2],
        ['C', 'B', 4],
      ],
      DIRECTIONAL,
    );
    const expected = { 'A emit': 5, 'B emit': 3, 'C emit': 1, 'A receive': 1, 'B receive': 3, 'C receive': 5 };
    expect(misses(levels(solved), expected)).toEqual([]);
    expect(statuses(solved)).toEqual(['datum']);
  });
});

describe('one projector, one receiver, one reversible unit', () => {
  const BENCH: readonly Reading[] = [
    ['P', 'H', 10],
    ['P', 'T', 8],
    ['T', 'H', 6],
  ];

  test('receive of H is half of PH + TH - PT, and the declaration takes the place of the datum', async () => {
    const solved = await solveReadings(BENCH, [...DIRECTIONAL, '--reversible', 'T']);
    expect(misses(levels(solved), { 'P emit': 6, 'H receive': 4, 'T emit': 2, 'T receive': 2 })).toEqual([]);
    expect(statuses(solved)).toEqual(['ok']);
  });

  test('20 dB more on every take is 10 dB more on every response', async () => {
    const louder = BENCH.map(([emitter, receiver, level]): Reading => [emitter, receiver, level + 20]);
    const solved = await solveReadings(louder, [...DIRECTIONAL, '--reversible', 'T']);
    expect(misses(levels(solved), { 'P emit': 16, 'H receive': 14, 'T emit': 12, 'T receive': 12 })).toEqual([]);
  });
});

describe('two parts', () => {
  test('each connected part has a datum of its own', async () => {
    const apart: readonly Reading[] = [
      ['R', 'V', 20],
      ['R', 'W', 24],
    ];
    const solved = await solveReadings([...TWO_BY_TWO, ...apart], DIRECTIONAL);
    const expected = { 'X receive': -1, 'Y receive': 1, 'V receive': -2, 'W receive': 2, 'R emit': 22, 'P emit': 11 };
    expect(misses(levels(solved), expected)).toEqual([]);
  });
});
