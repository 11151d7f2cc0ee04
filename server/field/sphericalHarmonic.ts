/**
 * Internal field from Schmidt coefficients, in Cartesian form, finite at the poles.
 *
 * With a = 1 the potential is V = Σ (C V_nm + S W_nm) over Cunningham's solid harmonics
 * V_nm + i W_nm = r^(−n−1) P_nm(sin φ) e^{imλ} (unnormalised, no Condon-Shortley phase), and each component of −∇V is a
 * fixed linear combination of those of degree n + 1. The combination is worked out once per model.
 *
 * @source Cunningham (1970), Celestial Mechanics 2, 207; Montenbruck & Gill (2000), Satellite Orbits, eqs 3.29-3.33
 */
export interface SchmidtCoefficient {
  readonly kind: 'g' | 'h';
  readonly n: number;
  readonly m: number;
  readonly valueNt: number;
}

export type FieldFunction = (x: number, y: number, z: number, out: Float64Array) => Float64Array;

/**
 * @param coefficients - Schmidt quasi-normalised, nT
 * @param degree - terms of higher degree are left out
 * @param uniformNt - uniform external field (3,), body-fixed, added everywhere
 * @returns field function: position in reference radii → nT, written to `out`; undefined only at r = 0
 */
export function sphericalHarmonicField(
  coefficients: readonly SchmidtCoefficient[],
  degree: number,
  uniformNt: readonly [number, number, number] = [0, 0, 0],
): FieldFunction {
  const top = degree + 1;
  const stride = top + 1;
  const size = stride * stride;
  const vx = new Float64Array(size);
  const wx = new Float64Array(size);
  const vy = new Float64Array(size);
  const wy = new Float64Array(size);
  const vz = new Float64Array(size);
  const wz = new Float64Array(size);

  for (const { kind, n, m, valueNt } of coefficients) {
    if (n > degree) continue;
    const value = valueNt * schmidtFactor(n, m);
    const c = kind === 'g' ? value : 0;
    const s = kind === 'h' ? value : 0;
    const row = (n + 1) * stride;
    // −∂V/∂x, −∂V/∂y, −∂V/∂z from the gradient relations of the solid harmonics.
    if (m === 0) {
      vx[row + 1] += c;
      wy[row + 1] += c;
    } else {
      const lower = ((n - m + 2) * (n - m + 1)) / 2;
      vx[row + m + 1] += c / 2;
      wx[row + m + 1] += s / 2;
      vx[row + m - 1] -= lower * c;
      wx[row + m - 1] -= lower * s;
      wy[row + m + 1] += c / 2;
      vy[row + m + 1] -= s / 2;
      wy[row + m - 1] += lower * c;
      vy[row + m - 1] -= lower * s;
    }
    vz[row + m] += (n - m + 1) * c;
    wz[row + m] += (n - m + 1) * s;
  }

  const v = new Float64Array(size);
  const w = new Float64Array(size);
  const [uniformX, uniformY, uniformZ] = uniformNt;

  return (x, y, z, out) => {
    const inverseR2 = 1 / (x * x + y * y + z * z);
    const px = x * inverseR2;
    const py = y * inverseR2;
    const pz = z * inverseR2;
    let bx = uniformX;
    let by = uniformY;
    let bz = uniformZ;
    v[0] = Math.sqrt(inverseR2);
    for (let m = 0; m <= top; m++) {
      const diagonal = m * stride + m;
      if (m > 0) {
        const previous = diagonal - stride - 1;
        const factor = 2 * m - 1;
        v[diagonal] = factor * (px * v[previous] - py * w[previous]);
        w[diagonal] = factor * (px * w[previous] + py * v[previous]);
      }
      for (let n = m; n <= top; n++) {
        const index = n * stride + m;
        if (n > m) {
          const one = index - stride;
          const a = (2 * n - 1) / (n - m);
          v[index] = a * pz * v[one];
          w[index] = a * pz * w[one];
          if (n > m + 1) {
            const two = one - stride;
            const b = ((n + m - 1) / (n - m)) * inverseR2;
            v[index] -= b * v[two];
            w[index] -= b * w[two];
          }
        }
        bx += vx[index] * v[index] + wx[index] * w[index];
        by += vy[index] * v[index] + wy[index] * w[index];
        bz += vz[index] * v[index] + wz[index] * w[index];
      }
    }
    out[0] = bx;
    out[1] = by;
    out[2] = bz;
    return out;
  };
}

/** From unnormalised to Schmidt quasi-normalised: sqrt(2 (n−m)! / (n+m)!) for m > 0, 1 for m = 0. */
function schmidtFactor(n: number, m: number): number {
  if (m === 0) return 1;
  let ratio = 2;
  for (let k = n - m + 1; k <= n + m; k++) ratio /= k;
  return Math.sqrt(ratio);
}
