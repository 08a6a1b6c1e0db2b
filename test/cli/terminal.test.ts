import { WriteStream } from 'node:tty';
import { describe, expect, it } from 'vitest';
import { textStyle } from '../../src/cli/terminal.ts';
import { PLAIN_STYLE } from '../../src/report/result.ts';

/** A terminal whose colours Node itself judges from the environment given. */
function terminalIn(environment: object) {
  const { hasColors, getColorDepth } = WriteStream.prototype;
  return {
    isTTY: true,
    getColorDepth,
    hasColors(count?: number) {
      return hasColors.call(this as unknown as WriteStream, count ?? 16, environment);
    },
  };
}

describe('textStyle', () => {
  it('colours text on a terminal that shows colour', () => {
    expect(textStyle(terminalIn({ TERM: 'xterm-256color' })).bad('open')).toBe('\u001B[31mopen\u001B[39m');
  });

  it.each([
    ['NO_COLOR is set', { TERM: 'xterm-256color', NO_COLOR: '1' }],
    ['the terminal is dumb', { TERM: 'dumb' }],
  ])('leaves text alone where %s', (_, environment) => {
    expect(textStyle(terminalIn(environment))).toBe(PLAIN_STYLE);
  });

  it('leaves text alone in a pipe or file', () => {
    expect(textStyle({})).toBe(PLAIN_STYLE);
    expect(textStyle({ isTTY: false, hasColors: () => true })).toBe(PLAIN_STYLE);
  });
});
