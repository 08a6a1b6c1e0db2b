import type { TextStyle } from '../report/result.ts';

/** Where the line goes: stderr, or what stands in for it. */
export interface ProgressStream {
  readonly isTTY?: boolean | undefined;
  readonly columns?: number | undefined;
  readonly write: (text: string) => unknown;
}

export interface ProgressOptions {
  readonly quiet: boolean;
  readonly style: TextStyle;
  readonly environment: Readonly<Record<string, string | undefined>>;
  /** Milliseconds. */
  readonly now?: () => number;
}

/** One line that tells a waiting person what is going on. */
export interface Progress {
  /** Names the step begun; the function takes what is done of it and all there is. */
  readonly step: (name: string) => (done: number, total: number) => void;
  /** Takes the line away. To be called before anything else is written to the terminal. */
  readonly clear: () => void;
}

/** A run shorter than this shows no line: it would only flicker. Milliseconds. */
const PATIENCE = 1000;
/** Least time between two lines. Milliseconds. */
const PAUSE = 100;
const START_OF_EMPTY_LINE = '\r\u001B[2K';

/** A progress line on a terminal; one that stays silent where there is no terminal, or it cannot take a line back, or quiet was asked for. */
export function progressLine(stream: ProgressStream, options: ProgressOptions): Progress {
  const now = options.now ?? (() => performance.now());
  if (stream.isTTY !== true || options.quiet || options.environment.TERM === 'dumb') {
    return { step: () => () => undefined, clear: () => undefined };
  }
  let due = now() + PATIENCE;
  let isShown = false;
  const show = (text: string) => {
    if (now() < due) return;
    due = now() + PAUSE;
    isShown = true;
    // A line that wraps could not be taken back. Some terminals say that they have 0 columns.
    stream.write(START_OF_EMPTY_LINE + options.style.faint(text.slice(0, (stream.columns || 80) - 1)));
  };
  return {
    step: (name) => {
      show(`${name} …`);
      return (done, total) => show(total > 0 ? `${name} … ${Math.floor((100 * done) / total)} %` : `${name} …`);
    },
    clear: () => {
      if (isShown) stream.write(START_OF_EMPTY_LINE);
      isShown = false;
    },
  };
}
