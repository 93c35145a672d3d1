/**
 * Balancing of a real matrix by a diagonal similarity with powers of two (Parlett & Reinsch 1969;
 * stopping rule of James, Langou & Lowery 2014 kept simple): rows and columns of like size make the
 * eigenvalues of a badly scaled matrix accurate. Changes `a` (n × n, row-major) in place.
 * Returns the diagonal d with a_new = D⁻¹·a·D.
 */
export function balance(a: Float64Array, n: number): Float64Array {
  const d = new Float64Array(n).fill(1);
  for (let sweep = 0; sweep < 60; sweep++) {
    let changed = false;
    for (let i = 0; i < n; i++) {
      let column = 0;
      let row = 0;
      for (let j = 0; j < n; j++) {
        if (j === i) continue;
        column += Math.abs(a[j * n + i]!);
        row += Math.abs(a[i * n + j]!);
      }
      const factor = scaleFactor(column, row);
      if (factor === 1) continue;
      changed = true;
      d[i] = d[i]! * factor;
      for (let j = 0; j < n; j++) {
        a[i * n + j] = a[i * n + j]! / factor;
      }
      for (let j = 0; j < n; j++) {
        a[j * n + i] = a[j * n + i]! * factor;
      }
    }
    if (!changed) break;
  }
  return d;
}

/** The power of two that brings column and row sums within a factor of two; 1 where nothing is gained. */
function scaleFactor(column: number, row: number): number {
  if (!(column > 0) || !(row > 0)) return 1;
  let factor = 1;
  let c = column;
  while (c < row / 2 && factor < 1e150) {
    factor *= 2;
    c *= 4;
  }
  while (c >= row * 2 && factor > 1e-150) {
    factor /= 2;
    c /= 4;
  }
  return column * factor + row / factor < 0.95 * (column + row) ? factor : 1;
}
