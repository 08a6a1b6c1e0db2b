/** What a script may rely on: how a run ended. */
export const EXIT = {
  done: 0,
  /** Done, and something was flagged; only where the user asks for it (`--strict`). */
  flagged: 1,
  /** The command line cannot be understood. */
  usage: 2,
  /** Input that cannot be used, or a place that cannot be written. */
  input: 3,
  /** The run is complete, and not a single response could be told apart from the others. */
  nothingApart: 4,
  /** A defect of the program. Source: EX_SOFTWARE of the BSD sysexits.h (value recalled from memory). */
  defect: 70,
} as const;

/** A process ended by a signal is seen by a shell as 128 + the signal's number. Source: POSIX shell, 2.8.2 (any value above 128). */
export const EXIT_BY_SIGNAL = { SIGHUP: 129, SIGINT: 130, SIGTERM: 143 } as const;
