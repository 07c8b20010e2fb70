/** A longer array that begins with the given one. */
export function enlarged(a: Float64Array, length: number): Float64Array<ArrayBuffer> {
  const b = new Float64Array(length);
  b.set(a);
  return b;
}

/** Index of the last of `count` ascending numbers that is not above x; 0 where all are. */
export function lastUpTo(ascending: Float64Array, count: number, x: number): number {
  let [low, high] = [0, count];
  while (high - low > 1) {
    const middle = (low + high) >> 1;
    if (ascending[middle] <= x) low = middle;
    else high = middle;
  }
  return low;
}
