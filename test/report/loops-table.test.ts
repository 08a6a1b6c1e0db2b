import { expect, test } from 'vitest';
import type { LoopFinding, LoopTerm } from '../../src/findings/loops.ts';
import { loopsTable, loopText } from '../../src/report/loops-table.ts';

const term = (emitter: string, receiver: string, sign: 1 | -1, more: Partial<LoopTerm> = {}): LoopTerm => ({
  emitter,
  receiver,
  path: '',
  session: '',
  sign,
  factor: 1,
  takes: [0],
  ...more,
});
const band = { from: 891.2509381337459, to: 1122.018454301963, frequencies: 3, independent: 2 };
const LOOPS: readonly LoopFinding[] = [
  {
    chain: [term('N01', 'N01', 1), term('N01', 'N02', -1, { factor: 2 }), term('N02', 'N02', 1)],
    bands: [
      { ...band, closure: -6, uncertainty: 1.22474487139, standardised: -4.89897948557 },
      { ...band, closure: 1 / 3, uncertainty: Number.NaN, standardised: Number.NaN },
    ],
  },
  {
    chain: [term('a "b"', 'c', 1), term('c', 'd', -1)],
    bands: [{ ...band, closure: 0, uncertainty: 0, standardised: Number.NaN }],
  },
];

test('a row a loop and band, with the chain as it is added up, and an empty cell where nothing is known', () => {
  expect([...loopsTable(LOOPS).chunks()].join('')).toBe(
    [
      'loop,chain,band_from_hz,band_to_hz,closure_db,u_db,standardised',
      'L01,N01>N01 - 2 N01>N02 + N02>N02,891.250938134,1122.0184543,-6.000000,1.22474,-4.8990',
      'L01,N01>N01 - 2 N01>N02 + N02>N02,891.250938134,1122.0184543,0.333333,,',
      'L02,"a ""b"">c - c>d",891.250938134,1122.0184543,0.000000,0,',
      '',
    ].join('\n'),
  );
});

test('path and session stand behind a pair only where they are told apart', () => {
  expect(loopText([term('A', 'B', -1, { path: 'block', session: 'mon' }), term('B', 'C', 1, { path: 'air' })])).toBe(
    '-A>B (block, mon) + B>C (air)',
  );
});

test('loops are numbered with leading zeros, so that they sort', () => {
  const many = Array.from({ length: 120 }, () => LOOPS[1]!);
  expect([...loopsTable(many).chunks()].join('').split('\n')[1]).toMatch(/^L001,/);
});
