/** Numbers of a figure as they stand in the page: lines with commas, cells quoted where they need it. */
export interface Numbers {
  readonly columns: readonly string[];
  readonly rows: readonly (readonly string[])[];
}

export function readNumbers(text: string): Numbers {
  const [columns = [], ...rows] = text
    .split('\n')
    .filter((line) => line !== '')
    .map(cellsOf);
  return { columns, rows };
}

function cellsOf(line: string): string[] {
  if (!line.includes('"')) return line.split(',');
  return [...line.matchAll(/(?:^|,)(?:"((?:[^"]|"")*)"|([^,]*))/g)].map(
    ([, quoted, bare]) => quoted?.replaceAll('""', '"') ?? bare ?? '',
  );
}

/** The row whose frequency is nearest along a logarithmic axis, or whose band holds it. */
export function rowAt({ columns, rows }: Numbers, frequency: number): number {
  const isBand = columns[0]?.startsWith('from') === true;
  if (isBand) {
    const found = rows.findIndex(([from, to]) => frequency >= Number(from) && frequency < Number(to));
    return found < 0 ? (frequency < Number(rows[0]?.[0]) ? 0 : rows.length - 1) : found;
  }
  let [low, high] = [0, rows.length - 1];
  while (low < high) {
    const middle = (low + high) >> 1;
    const border = Math.sqrt(Number(rows[middle]?.[0]) * Number(rows[middle + 1]?.[0]));
    if (frequency > border) low = middle + 1;
    else high = middle;
  }
  return low;
}
