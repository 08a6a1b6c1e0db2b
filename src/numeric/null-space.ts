/** Entries below this part of the largest are rounding: rows hold small whole numbers, so that pivots stay of order 1. */
const RANK_TOLERANCE = 1e-9;

/**
 * Basis of the vectors that all rows send to 0, by elimination with row pivoting to reduced echelon form.
 * Meant for rows of small whole numbers (incidences); each basis vector has a 1 at its own free column.
 * Cost: rows × columns².
 */
export function nullSpace(rows: readonly Float64Array[], columns: number): Float64Array[] {
  const work = rows.map((row) => Float64Array.from(row));
  const pivotRowOf = new Int32Array(columns).fill(-1);
  let rank = 0;
  for (let column = 0; column < columns && rank < work.length; column++) {
    let best = rank;
    for (let r = rank + 1; r < work.length; r++) {
      if (Math.abs(work[r]![column]!) > Math.abs(work[best]![column]!)) best = r;
    }
    const pivot = work[best]![column]!;
    if (Math.abs(pivot) <= RANK_TOLERANCE) continue;
    [work[rank], work[best]] = [work[best]!, work[rank]!];
    const pivotRow = work[rank]!;
    for (let c = column; c < columns; c++) pivotRow[c] = pivotRow[c]! / pivot;
    for (let r = 0; r < work.length; r++) {
      const factor = work[r]![column]!;
      if (r === rank || factor === 0) continue;
      const row = work[r]!;
      for (let c = column; c < columns; c++) row[c] = row[c]! - factor * pivotRow[c]!;
    }
    pivotRowOf[column] = rank++;
  }
  const basis: Float64Array[] = [];
  for (let free = 0; free < columns; free++) {
    if (pivotRowOf[free] !== -1) continue;
    const vector = new Float64Array(columns);
    vector[free] = 1;
    for (let c = 0; c < columns; c++) {
      if (pivotRowOf[c] !== -1) vector[c] = -work[pivotRowOf[c]!]![free]! || 0;
    }
    basis.push(vector);
  }
  return basis;
}
