/**
 * Nodes and weights of Gauss-Legendre quadrature on [−1, 1].
 *
 * Newton's method on P_n from Tricomi's estimate of its zeros; errors of a few units in the last place.
 *
 * @param n - number of nodes, ≥ 1
 * @source Abramowitz & Stegun (1964), 25.4.29
 */
export function gaussLegendre(n: number): { readonly x: Float64Array; readonly w: Float64Array } {
  const x = new Float64Array(n);
  const w = new Float64Array(n);
  for (let i = 0; i < n; i++) {
    let z = Math.cos((Math.PI * (i + 0.75)) / (n + 0.5));
    let derivative = 1;
    for (let step = 0; step < 100; step++) {
      let previous = 1;
      let value = z;
      for (let k = 2; k <= n; k++) {
        const next = ((2 * k - 1) * z * value - (k - 1) * previous) / k;
        previous = value;
        value = next;
      }
      if (n === 1) previous = 1;
      derivative = (n * (z * value - previous)) / (z * z - 1);
      const shift = value / derivative;
      z -= shift;
      if (Math.abs(shift) < 1e-15) break;
    }
    x[n - 1 - i] = z;
    w[n - 1 - i] = 2 / ((1 - z * z) * derivative * derivative);
  }
  return { x, w };
}
