/** The command line cannot be understood. Carries every trouble that was found in it, one sentence each. */
export class UsageError extends Error {
  readonly troubles: readonly string[];

  constructor(troubles: readonly string[]) {
    super(troubles.join('\n'));
    this.name = 'UsageError';
    this.troubles = troubles;
  }
}
