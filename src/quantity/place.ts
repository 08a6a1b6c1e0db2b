/** Where in a user's file something stands. Line and column count from 1; absent where the trouble has no single place. */
export interface Place {
  readonly file: string;
  readonly line?: number;
  /** The column's header, as the user wrote it. */
  readonly column?: string;
}

/** `bench.csv:12 level_db`, with as much of it as is known. */
export function placeText(place: Place): string {
  const line = place.line === undefined ? '' : `:${place.line}`;
  const column = place.column === undefined ? '' : ` ${place.column}`;
  return `${place.file}${line}${column}`;
}
