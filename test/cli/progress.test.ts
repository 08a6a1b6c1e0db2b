import { describe, expect, it } from 'vitest';
import { progressLine } from '../../src/cli/progress.ts';
import { PLAIN_STYLE } from '../../src/report/result.ts';

function onTerminal(options: { isTTY?: boolean; quiet?: boolean; columns?: number; term?: string } = {}) {
  const written: string[] = [];
  let time = 0;
  const progress = progressLine(
    { isTTY: options.isTTY ?? true, columns: options.columns, write: (text) => written.push(text) },
    {
      quiet: options.quiet ?? false,
      style: PLAIN_STYLE,
      environment: { TERM: options.term ?? 'xterm' },
      now: () => time,
    },
  );
  return {
    progress,
    written,
    at: (milliseconds: number) => {
      time = milliseconds;
    },
  };
}

const EMPTY_LINE = '\r\u001B[2K';

describe('progressLine', () => {
  it('shows nothing in the first second, then one line that is rewritten, and takes it away at the end', () => {
    const { progress, written, at } = onTerminal();
    const solving = progress.step('solving');
    at(999);
    solving(1, 4);
    expect(written).toEqual([]);
    at(1000);
    solving(2, 4);
    at(1200);
    solving(3, 4);
    progress.clear();
    expect(written).toEqual([`${EMPTY_LINE}solving … 50 %`, `${EMPTY_LINE}solving … 75 %`, EMPTY_LINE]);
  });

  it('writes at most ten lines a second, however often it is called', () => {
    const { progress, written, at } = onTerminal();
    const reading = progress.step('reading');
    for (let time = 1000; time < 2000; time++) {
      at(time);
      reading(time, 2000);
    }
    expect(written).toHaveLength(10);
  });

  it('writes nothing at all in a run that ends within a second, not even to clear', () => {
    const { progress, written } = onTerminal();
    progress.step('reading')(1, 1);
    progress.clear();
    expect(written).toEqual([]);
  });

  it.each([
    ['without a terminal', { isTTY: false }],
    ['with quiet', { quiet: true }],
    ['where the terminal cannot take a line back', { term: 'dumb' }],
  ])('stays silent %s', (_, options) => {
    const { progress, written, at } = onTerminal(options);
    at(5000);
    progress.step('reading')(1, 2);
    progress.clear();
    expect(written).toEqual([]);
  });

  it('never wraps, since a wrapped line could not be taken back', () => {
    const { progress, written, at } = onTerminal({ columns: 10 });
    at(2000);
    progress.step('writing a-very-long-name.csv');
    expect(written[0]?.slice(EMPTY_LINE.length)).toBe('writing a');
  });

  it('writes the whole line where the terminal does not know its width', () => {
    const { progress, written, at } = onTerminal({ columns: 0 });
    at(2000);
    progress.step('solving');
    expect(written).toEqual([`${EMPTY_LINE}solving …`]);
  });

  it('does not divide by nothing to do', () => {
    const { progress, written, at } = onTerminal();
    const reading = progress.step('reading');
    at(2000);
    reading(0, 0);
    expect(written).toEqual([`${EMPTY_LINE}reading …`]);
  });
});
