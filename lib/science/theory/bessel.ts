const NEGLIGIBLE = 1e-17;

/**
 * Returns J_0(x), J_1(x), … for x ≥ 0 up to where they are negligible, by downward recurrence (Miller's algorithm),
 * normalised with J_0 + 2 Σ J_2k = 1.
 */
export function besselSeries(x: number): Float64Array {
  if (x === 0) return Float64Array.of(1);
  const start = 2 * Math.ceil((x + 20 + 12 * Math.cbrt(x)) / 2 + 10);
  const values = new Float64Array(start + 2);
  values[start] = 1e-290;
  for (let k = start; k > 0; k--) {
    values[k - 1] = ((2 * k) / x) * values[k] - values[k + 1];
    if (Math.abs(values[k - 1]) > 1e250) values.forEach((value, q) => (values[q] = value * 1e-250));
  }
  let norm = values[0];
  for (let k = 2; k <= start; k += 2) norm += 2 * values[k];
  const series = values.map((value) => value / norm);
  const last = series.findLastIndex((value) => Math.abs(value) > NEGLIGIBLE);
  return series.slice(0, last + 1);
}
