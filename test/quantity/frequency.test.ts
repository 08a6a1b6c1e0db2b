import { describe, expect, it } from 'vitest';
import { frequencyText, hertzPerUnit, parseFrequency, parseRange } from '../../src/quantity/frequency.ts';

describe('frequencies as written', () => {
  it.each([
    ['20 kHz', 20_000],
    ['0.5MHz', 500_000],
    [' 8000 hz ', 8000],
    ['1e3 Hz', 1000],
    ['2.5E-1 kHz', 250],
  ])('reads %s', (text, value) => {
    expect(parseFrequency(text)).toBe(value);
  });

  it.each(['20', 'kHz', '', '-5 kHz', '0 Hz', '20 kHz 3', '20 dB', '1,5 kHz', 'Infinity Hz', 'NaN Hz'])(
    'cannot tell what "%s" means',
    (text) => {
      expect(parseFrequency(text)).toBeUndefined();
    },
  );

  it('knows Hz, kHz and MHz in any case, and no other word', () => {
    expect([hertzPerUnit('HZ'), hertzPerUnit(' khz '), hertzPerUnit('MHz')]).toEqual([1, 1e3, 1e6]);
    expect(hertzPerUnit('rpm')).toBeUndefined();
  });

  it('reads a range with a unit at each end, in order', () => {
    expect(parseRange('2 kHz..80 kHz')).toEqual({ from: 2000, to: 80_000 });
    expect(parseRange('500 Hz .. 1 MHz')).toEqual({ from: 500, to: 1_000_000 });
  });

  it.each(['2..80 kHz', '80 kHz..2 kHz', '2 kHz..2 kHz', '2 kHz', '1 Hz..2 Hz..3 Hz', '..2 kHz'])(
    'does not take "%s" for a range',
    (text) => {
      expect(parseRange(text)).toBeUndefined();
    },
  );

  it('writes a frequency as a person does', () => {
    expect([250, 31_500, 1.2e6, 1000, 1258.925].map((value) => frequencyText(value))).toEqual([
      '250 Hz',
      '31.5 kHz',
      '1.2 MHz',
      '1 kHz',
      '1.259 kHz',
    ]);
    expect(frequencyText(1258.9254, 6)).toBe('1.25893 kHz');
  });
});
