/**
 * Reading one site of a free-fermion state: the updates of its window. Windows are lower triangles, row a at a·width; a
 * loop's last step may write up to three elements beyond its row's part, which nothing reads before they are written.
 */

/** to[a−1][b−1] = from[a][b] + factor · k_a k_b for 1 ≤ b ≤ a < held, with k the first column of `from`; float64. */
export function conditionDeterminant(from: usize, to: usize, column: usize, width: i32, held: i32, factor: f64): void {
  const row: usize = usize(width) << 3;
  for (let a: usize = 0; a < usize(held); a++) store<f64>(column + (a << 3), load<f64>(from + a * row));
  for (let a: usize = 1; a < usize(held); a++) {
    const scaled = f64x2.splat(factor * load<f64>(column + (a << 3)));
    const source = from + a * row;
    const target = to + (a - 1) * row - 8;
    const end: usize = a << 3;
    for (let b: usize = 8; b <= end; b += 16) {
      v128.store(target + b, f64x2.add(v128.load(source + b), f64x2.mul(scaled, v128.load(column + b))));
    }
  }
}

/**
 * to[c−2][d−2] = from[c][d] + factor · (u_c v_d − v_c u_d) for 2 ≤ d < c < held, with u and v the first two columns of
 * `from`; float32. `width` and `held` count Majorana operators, two a site.
 */
export function conditionMajorana(from: usize, to: usize, first: usize, second: usize, width: i32, held: i32, factor: f32): void {
  const row: usize = usize(width) << 2;
  for (let c: usize = 2; c < usize(held); c++) {
    store<f32>(first + (c << 2), load<f32>(from + c * row));
    store<f32>(second + (c << 2), load<f32>(from + c * row + 4));
  }
  for (let c: usize = 3; c < usize(held); c++) {
    const u = f32x4.splat(factor * load<f32>(first + (c << 2)));
    const v = f32x4.splat(factor * load<f32>(second + (c << 2)));
    const source = from + c * row;
    const target = to + (c - 2) * row - 8;
    const end: usize = c << 2;
    for (let d: usize = 8; d < end; d += 16) {
      const turned = f32x4.sub(f32x4.mul(u, v128.load(second + d)), f32x4.mul(v, v128.load(first + d)));
      v128.store(target + d, f32x4.add(v128.load(source + d), turned));
    }
  }
}
