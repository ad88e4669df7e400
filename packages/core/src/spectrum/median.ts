/**
 * The k-th smallest of the first `length` values (0 = smallest), by selection in place (C. A. R. Hoare, CACM 4, 321, 1961).
 * The array is reordered; NaN must not be in it.
 */
export function selectInPlace(values: Float64Array, length: number, k: number): number {
  let low = 0;
  let high = length - 1;
  while (low < high) {
    const middle = (low + high) >> 1;
    const a = values[low]!;
    const b = values[middle]!;
    const c = values[high]!;
    const pivot = a < b ? (b < c ? b : a < c ? c : a) : a < c ? a : b < c ? c : b;
    let i = low;
    let j = high;
    while (i <= j) {
      while (values[i]! < pivot) i += 1;
      while (values[j]! > pivot) j -= 1;
      if (i <= j) {
        const swap = values[i]!;
        values[i] = values[j]!;
        values[j] = swap;
        i += 1;
        j -= 1;
      }
    }
    if (k <= j) high = j;
    else if (k >= i) low = i;
    else break;
  }
  return values[k]!;
}

/** Median of the first `length` values, the mean of the two middle ones when their number is even; reorders the array. */
export function medianInPlace(values: Float64Array, length: number): number {
  const middle = length >> 1;
  const upper = selectInPlace(values, length, middle);
  if ((length & 1) === 1) return upper;
  // Selection leaves the smaller half below the middle.
  let lower = values[0]!;
  for (let i = 1; i < middle; i += 1) if (values[i]! > lower) lower = values[i]!;
  return (lower + upper) / 2;
}

/** Median of any list of numbers, NaN when it is empty; the list is left as it is. */
export function median(values: ArrayLike<number>): number {
  if (values.length === 0) return NaN;
  return medianInPlace(Float64Array.from(values), values.length);
}
