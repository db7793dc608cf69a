/**
 * Moves the value of rank `rank` (from 0, ascending) among values[first … last] to values[rank], with none larger before it and none
 * smaller after it, and returns it. Finite values only; `values` is reordered. Hoare's selection (1961), median of three.
 */
export function selectRank(values: Float64Array, rank: number, first: number, last: number): number {
  let low = first;
  let high = last;
  while (low < high) {
    const pivot = medianOfThree(values[low], values[(low + high) >>> 1], values[high]);
    let left = low;
    let right = high;
    while (left <= right) {
      while (values[left] < pivot) left += 1;
      while (values[right] > pivot) right -= 1;
      if (left > right) break;
      const moved = values[left];
      values[left] = values[right];
      values[right] = moved;
      left += 1;
      right -= 1;
    }
    if (rank <= right) high = right;
    else if (rank >= left) low = left;
    else return values[rank];
  }
  return values[rank];
}

function medianOfThree(a: number, b: number, c: number): number {
  return Math.max(Math.min(a, b), Math.min(Math.max(a, b), c));
}

/**
 * Returns the type 7 quantiles at p and at 1 − p, p < 0.5, of finite values, as sorting would give them; reorders `values`. NaN when empty.
 */
export function tailQuantiles(values: Float64Array, p: number): [low: number, high: number] {
  const last = values.length - 1;
  if (last < 0) return [Number.NaN, Number.NaN];
  const lowRank = Math.floor(last * p);
  const highRank = Math.floor(last * (1 - p));
  const low = quantileFrom(values, last * p, lowRank, 0, last);
  const high = quantileFrom(values, last * (1 - p), highRank, Math.min(lowRank + 1, highRank), last);
  return [low, high];
}

function quantileFrom(values: Float64Array, place: number, rank: number, first: number, last: number): number {
  const below = selectRank(values, rank, first, last);
  const share = place - rank;
  if (share === 0) return below;
  const next = selectRank(values, rank + 1, rank + 1, last);
  return below + (next - below) * share;
}
