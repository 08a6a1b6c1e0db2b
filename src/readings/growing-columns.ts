/** Numbers that come one by one; their storage doubles as it fills. */
export interface GrowingColumn {
  readonly length: number;
  push(value: number): void;
  /** A copy of exactly the numbers pushed. */
  toArray(): Float64Array;
  /** The same for numbers that are whole. */
  toIntegers(): Int32Array;
}

const FIRST_CAPACITY = 1024;

export function growingColumn(): GrowingColumn {
  let values = new Float64Array(FIRST_CAPACITY);
  let length = 0;
  return {
    get length() {
      return length;
    },
    push(value) {
      if (length === values.length) {
        const larger = new Float64Array(2 * length);
        larger.set(values);
        values = larger;
      }
      values[length++] = value;
    },
    toArray: () => values.slice(0, length),
    toIntegers: () => new Int32Array(values.subarray(0, length)),
  };
}

/** A column that may be absent: it takes storage with its first number, and NaN stands for the entries without one. */
export interface OptionalColumn {
  /** @param entries how many entries there are before this one. */
  push(value: number, entries: number): void;
  /** Undefined where no number was ever given. */
  toArray(entries: number): Float64Array | undefined;
}

export function optionalColumn(): OptionalColumn {
  let column: GrowingColumn | undefined;
  const fillTo = (entries: number) => {
    while (column !== undefined && column.length < entries) column.push(Number.NaN);
  };
  return {
    push(value, entries) {
      if (Number.isNaN(value)) return;
      column ??= growingColumn();
      fillTo(entries);
      column.push(value);
    },
    toArray(entries) {
      fillTo(entries);
      return column?.toArray();
    },
  };
}
