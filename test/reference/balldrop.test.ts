/**
 * Real measurements, where they lie beside the project: 32 acoustic-emission sensors, 32 ball-drop places on a rock sample.
 * Source: K. Okubo, F. Yamashita, E. Fukuyama (2025), repository kura-okubo/4mNonSelfSim_Paper, Calibration/SensorCoupling_BallDrop
 * (MIT licence). Ranks and residual sds recomputed by dense least squares (numpy).
 */
import { existsSync, readFileSync } from 'node:fs';
import { fileURLToPath } from 'node:url';
import { describe, expect, test } from 'vitest';
import { numberIn, type Solved, solveFiles, WRITTEN } from '../command/solve-folder.ts';

const folder = fileURLToPath(new URL('../../../shared/data/balldrop/', import.meta.url));
const found = existsSync(folder);
if (!found)
  console.info('balldrop: ../shared/data/balldrop is not here, so the check against real measurements is left out');

const solve = async (name: string): Promise<Solved> => {
  const solved = await solveFiles({ [name]: readFileSync(folder + name) }, [name, '--model', 'directional']);
  expect(solved.code, solved.said).toBe(0);
  return solved;
};

interface Fit {
  readonly readings: number;
  readonly dof: number;
  readonly sd: number;
}

/** Redundancies sum to readings less rank. */
const fitAt = (solved: Solved, frequency: number): Fit => {
  const rows = solved.rows('residuals.csv').filter((row) => numberIn(row, 'frequency_hz') === frequency);
  const dof = rows.reduce((sum, row) => sum + numberIn(row, 'redundancy'), 0);
  const squares = rows.reduce((sum, row) => sum + numberIn(row, 'residual_db') ** 2, 0);
  return { readings: rows.length, dof, sd: Math.sqrt(squares / dof) };
};

describe.runIf(found)('balldrop', () => {
  test('the pulse file: 117 readings, rank 63 of 64, residual sd 1.13 dB', async () => {
    const solved = await solve('ae_pulse.csv');
    const { readings, dof, sd } = fitAt(solved, 100000);
    expect(readings).toBe(117);
    expect(Math.abs(dof - (117 - 63))).toBeLessThan(117 * WRITTEN);
    expect(sd).toBeCloseTo(1.1304834736651304, 5);
    expect(solved.rows('responses.csv')).toHaveLength(64);
    expect(new Set(solved.rows('responses.csv').map((row) => row.status))).toEqual(new Set(['datum']));
  });

  test('the pulse file: nothing checks OL32, which has a single reading, and it is named', async () => {
    const solved = await solve('ae_pulse.csv');
    const unchecked = solved.rows('residuals.csv').filter((row) => numberIn(row, 'redundancy') < WRITTEN);
    expect(unchecked.map((row) => row.receiver)).toEqual(['OL32']);
    expect(solved.stdout.replace(/\s+/g, ' ')).toMatch(/[Nn]othing checks OL32 receive/);
  });

  /**
   * The noise correction moves single readings by at most half a decibel (clearance of 10 dB and more), most by none:
   * a change of the sd below 0.1 dB.
   */
  test('the spectra: 193 readings, rank 63 of 64 and sd 6.5 to 7.8 dB at each of five frequencies', async () => {
    const solved = await solve('ae_spectra.csv');
    const SD: readonly (readonly [number, number])[] = [
      [60000, 6.854],
      [120000, 6.493],
      [180000, 6.602],
      [240000, 6.722],
      [300000, 7.832],
    ];
    for (const [frequency, expected] of SD) {
      const { readings, dof, sd } = fitAt(solved, frequency);
      expect([frequency, readings]).toEqual([frequency, 193]);
      expect(Math.abs(dof - (193 - 63))).toBeLessThan(193 * WRITTEN);
      expect(Math.abs(sd - expected), `${frequency} Hz: ${sd}`).toBeLessThan(0.1);
    }
    expect(solved.said).toMatch(/incidence_deg/);
  });

  // Residual sds of 6.5 to 7.8 dB (above) against a tolerance of 1 dB.
  test('the spectra: the additive model is said to fail in every band, before any level', async () => {
    const solved = await solve('ae_spectra.csv');
    const text = solved.stdout.replace(/\s+/g, ' ');
    expect(text).toMatch(/^Read [^.]*300 kHz\. THE ADDITIVE MODEL FAILS in every band /);
    expect(text).toContain('No level below can be relied on');
    const { mounting } = JSON.parse(solved.text('summary.json')!);
    expect(mounting.model_fails).toHaveLength(5);
    expect(mounting.counts.holds).toBe(0);
  });

  test('the pulse file, with a sd of 1.13 dB over all 64 units, is not said to fail as a whole', async () => {
    const solved = await solve('ae_pulse.csv');
    expect(solved.stdout).not.toContain('ADDITIVE MODEL FAILS');
  });
});
