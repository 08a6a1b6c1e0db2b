/** Dense matrices for checks by another way than the program's: Gauss–Jordan with pivots, row by row. */
export type Matrix = readonly (readonly number[])[];

export function inverseOf(matrix: Matrix): number[][] {
  const n = matrix.length;
  const work = matrix.map((row, i) => [...row, ...Array.from({ length: n }, (_, j) => Number(i === j))]);
  for (let column = 0; column < n; column++) {
    let pivot = column;
    for (let row = column; row < n; row++) {
      if (Math.abs(work[row]![column]!) > Math.abs(work[pivot]![column]!)) pivot = row;
    }
    [work[column], work[pivot]] = [work[pivot]!, work[column]!];
    const top = work[column]!;
    const scale = top[column]!;
    if (Math.abs(scale) < 1e-9) throw new RangeError('singular');
    for (let k = 0; k < 2 * n; k++) top[k] = top[k]! / scale;
    work.forEach((row, i) => {
      const factor = row[column]!;
      if (i === column || factor === 0) return;
      for (let k = 0; k < 2 * n; k++) row[k] = row[k]! - factor * top[k]!;
    });
  }
  return work.map((row) => row.slice(n));
}

export function product(a: Matrix, b: Matrix): number[][] {
  return a.map((row) => b[0]!.map((_, j) => row.reduce((sum, entry, k) => sum + entry * b[k]![j]!, 0)));
}

export function transposed(a: Matrix): number[][] {
  return a[0]!.map((_, j) => a.map((row) => row[j]!));
}
