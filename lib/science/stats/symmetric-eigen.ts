/** Eigenvalues ascending, and the orthonormal eigenvectors as columns, `[row][column]`. */
export interface SymmetricEigen {
  values: Float64Array;
  vectors: Float64Array;
}

const MOST_SWEEPS = 60;

/**
 * Returns the eigen-decomposition of a symmetric `size` × `size` matrix `[row][column]`, by Householder reduction to a
 * tridiagonal and implicit QL (Bowdler, Martin, Reinsch and Wilkinson 1968). Throws RangeError when QL does not
 * converge, as with entries that are not numbers.
 */
export function symmetricEigen(matrix: Float64Array, size: number): SymmetricEigen {
  // The basis vectors are kept as rows, so that the rotations walk along memory.
  const basis = Float64Array.from(matrix);
  const values = new Float64Array(size);
  const off = new Float64Array(size);
  reduce(basis, values, off, size);
  diagonalise(basis, values, off, size);
  return sorted(basis, values, size);
}

/** Reduces to a tridiagonal with diagonal `values` and subdiagonal `off[1…]`; row m of `basis` becomes the m-th basis vector. */
function reduce(basis: Float64Array, values: Float64Array, off: Float64Array, size: number): void {
  const work = Float64Array.from(basis);
  const vectors = identity(size);
  const v = new Float64Array(size);
  const p = new Float64Array(size);
  for (let column = 0; column < size - 2; column++) {
    let norm = 0;
    for (let row = column + 1; row < size; row++) norm = Math.hypot(norm, work[row * size + column]);
    if (norm === 0) continue;
    const head = work[(column + 1) * size + column];
    v.fill(0);
    for (let row = column + 1; row < size; row++) v[row] = work[row * size + column];
    v[column + 1] = head + (head >= 0 ? norm : -norm);
    let squares = 0;
    for (let row = column + 1; row < size; row++) squares += v[row] * v[row];
    reflectBothSides(work, v, p, 2 / squares, column, size);
    for (let row = 0; row < size; row++) reflectRow(vectors, row, v, 2 / squares, column + 1, size);
  }
  for (let m = 0; m < size; m++) {
    values[m] = work[m * size + m];
    off[m] = m === 0 ? 0 : work[m * size + m - 1];
    for (let row = 0; row < size; row++) basis[m * size + row] = vectors[row * size + m];
  }
}

function identity(size: number): Float64Array {
  const matrix = new Float64Array(size * size);
  for (let m = 0; m < size; m++) matrix[m * size + m] = 1;
  return matrix;
}

/** work ← (1 − s v vᵀ) work (1 − s v vᵀ), for v zero up to `column`. */
function reflectBothSides(work: Float64Array, v: Float64Array, p: Float64Array, s: number, column: number, size: number): void {
  let overlap = 0;
  for (let row = column; row < size; row++) {
    let sum = 0;
    for (let m = column + 1; m < size; m++) sum += work[row * size + m] * v[m];
    p[row] = s * sum;
    overlap += p[row] * v[row];
  }
  const half = (s * overlap) / 2;
  for (let row = column; row < size; row++) p[row] -= half * v[row];
  for (let row = column; row < size; row++) {
    for (let m = column; m < size; m++) work[row * size + m] -= v[row] * p[m] + p[row] * v[m];
  }
}

function reflectRow(vectors: Float64Array, row: number, v: Float64Array, s: number, from: number, size: number): void {
  let sum = 0;
  for (let m = from; m < size; m++) sum += vectors[row * size + m] * v[m];
  for (let m = from; m < size; m++) vectors[row * size + m] -= s * sum * v[m];
}

function diagonalise(basis: Float64Array, values: Float64Array, off: Float64Array, size: number): void {
  off.copyWithin(0, 1);
  off[size - 1] = 0;
  for (let low = 0; low < size; low++) {
    for (let sweep = 0; ; sweep++) {
      let high = low;
      while (high < size - 1 && !isNegligible(off[high], values[high], values[high + 1])) high += 1;
      if (high === low) break;
      if (sweep === MOST_SWEEPS) throw new RangeError("the eigenvalues of a symmetric matrix were not found");
      implicitStep(basis, values, off, low, high, size);
    }
  }
}

function isNegligible(off: number, above: number, below: number): boolean {
  return Math.abs(off) <= Number.EPSILON * (Math.abs(above) + Math.abs(below));
}

/** One implicit QL step with Wilkinson's shift on the block low … high. */
function implicitStep(basis: Float64Array, values: Float64Array, off: Float64Array, low: number, high: number, size: number): void {
  const gap = (values[low + 1] - values[low]) / (2 * off[low]);
  const root = Math.hypot(gap, 1);
  let g = values[high] - values[low] + off[low] / (gap + (gap >= 0 ? root : -root));
  let [sine, cosine, shift] = [1, 1, 0];
  for (let m = high - 1; m >= low; m--) {
    const f = sine * off[m];
    const b = cosine * off[m];
    const length = Math.hypot(f, g);
    off[m + 1] = length;
    if (length === 0) {
      values[m + 1] -= shift;
      off[high] = 0;
      return;
    }
    sine = f / length;
    cosine = g / length;
    g = values[m + 1] - shift;
    const turn = (values[m] - g) * sine + 2 * cosine * b;
    shift = sine * turn;
    values[m + 1] = g + shift;
    g = cosine * turn - b;
    rotateRows(basis, m * size, (m + 1) * size, sine, cosine, size);
  }
  values[low] -= shift;
  off[low] = g;
  off[high] = 0;
}

function rotateRows(basis: Float64Array, first: number, second: number, sine: number, cosine: number, size: number): void {
  for (let m = 0; m < size; m++) {
    const above = basis[first + m];
    const below = basis[second + m];
    basis[second + m] = sine * above + cosine * below;
    basis[first + m] = cosine * above - sine * below;
  }
}

function sorted(basis: Float64Array, values: Float64Array, size: number): SymmetricEigen {
  const order = Array.from(values.keys()).sort((a, b) => values[a] - values[b]);
  const vectors = new Float64Array(size * size);
  order.forEach((from, column) => {
    for (let row = 0; row < size; row++) vectors[row * size + column] = basis[from * size + row];
  });
  return { values: Float64Array.from(order, (from) => values[from]), vectors };
}
