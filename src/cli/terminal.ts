import { styleText } from 'node:util';
import { InputError } from '../quantity/input-fault.ts';
import { PLAIN_STYLE, type TextStyle } from '../report/result.ts';
import { visible } from '../report/text-layout.ts';

/** Writes a result to stdout. A reader who has seen enough (`| head`) is no trouble. */
export function writeResult(text: string): Promise<void> {
  return new Promise((done, fail) => {
    process.stdout.write(text, (error) => {
      if (error === null || error === undefined || ('code' in error && error.code === 'EPIPE')) return done();
      const place = { file: 'standard output' };
      const expected = 'a place that takes the result';
      fail(new InputError([{ place, found: error.message, expected, remedy: 'Send it elsewhere.' }]));
    });
  });
}

/** Writes a message to stderr, with control characters from names made visible, so that none reaches the terminal. */
export function writeMessage(text: string): void {
  process.stderr.write(`${text.split('\n').map(visible).join('\n')}\n`);
}

/** Errors of the two streams reach the writers above; without a listener they would end the process on top. */
export function quietStreams(): void {
  for (const stream of [process.stdout, process.stderr]) {
    if (stream.listenerCount('error') === 0) stream.on('error', () => undefined);
  }
}

/** What tells whether a stream shows colour. */
export interface ColourStream {
  readonly isTTY?: boolean | undefined;
  /** Node's own answer, from NO_COLOR, TERM and the like. */
  readonly hasColors?: (count?: number) => boolean;
}

/** Colours for a terminal that shows them; none for pipes and files, and none where NO_COLOR is set. */
export function textStyle(stream: ColourStream): TextStyle {
  if (stream.isTTY !== true || stream.hasColors?.(16) !== true) return PLAIN_STYLE;
  const styled = (format: 'bold' | 'dim' | 'green' | 'yellow' | 'red') => (text: string) =>
    styleText(format, text, { validateStream: false });
  return {
    strong: styled('bold'),
    faint: styled('dim'),
    good: styled('green'),
    warning: styled('yellow'),
    bad: styled('red'),
  };
}
