import { describe, expect, test } from 'vitest';
import { cleanSets, exchangedLabels, fourFaults, localDips, movedGains, shiftingResonances } from './detection.ts';

/** Sets of each kind; `npm run simulate` takes more. */
const SETS = 40;
const MINUTES = 60_000;

/** A share that is p in truth is seen below this in one of a thousand runs: 3.1 sampling errors. */
const atLeast = (p: number) => p - 3.1 * Math.sqrt((p * (1 - p)) / SETS);
const atMost = (p: number) => p + 3.1 * Math.sqrt((p * (1 - p)) / SETS);

describe('faults planted in one take of a bench of 8 units, 2 seatings, 2 repeats, 150 frequencies', () => {
  test(
    'a clean set has no flag in 95 % of sets',
    async () => {
      const { sets, counts } = await cleanSets(SETS);
      expect(counts['any flag']! / sets).toBeLessThanOrEqual(atMost(0.05));
    },
    5 * MINUTES,
  );

  test(
    'a gain moved by 1 dB is flagged, called a moved gain, and its size lies within its U',
    async () => {
      const { sets, counts } = await movedGains(SETS);
      expect(counts.flagged! / sets).toBeGreaterThanOrEqual(0.95);
      expect(counts.named! / sets).toBeGreaterThanOrEqual(0.9);
      expect(counts['within U']! / sets).toBeGreaterThanOrEqual(atLeast(0.95));
    },
    5 * MINUTES,
  );

  test(
    'an exchanged label is flagged, and the right unit is named at the right end',
    async () => {
      const { sets, counts } = await exchangedLabels(SETS);
      expect(counts.flagged! / sets).toBeGreaterThanOrEqual(0.99);
      expect(counts.named! / sets).toBeGreaterThanOrEqual(0.9);
    },
    5 * MINUTES,
  );

  test(
    'a local dip of 2 dB over a third of an octave is flagged',
    async () => {
      const { sets, counts } = await localDips(SETS);
      expect(counts.flagged! / sets).toBeGreaterThanOrEqual(0.9);
    },
    5 * MINUTES,
  );

  test(
    'of four faults of different kinds at once nine tenths are found',
    async () => {
      const { sets, counts } = await fourFaults(SETS);
      expect(counts.found! / sets).toBeGreaterThanOrEqual(0.9);
    },
    5 * MINUTES,
  );

  test(
    'a unit whose resonance shifts with its partner is reported there, and hardly anything else is',
    async () => {
      const { sets, counts } = await shiftingResonances(SETS);
      expect(counts.reported! / sets).toBeGreaterThanOrEqual(0.9);
      expect(counts['other units accused']! / sets).toBeLessThanOrEqual(0.05);
      expect(counts['other bands accused']! / sets).toBeLessThanOrEqual(0.05);
    },
    5 * MINUTES,
  );
});
