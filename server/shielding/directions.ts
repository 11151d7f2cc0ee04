/**
 * Directions that share the sphere equally: the spherical Fibonacci lattice. Each stands for 1/count of 4π.
 *
 * @param count - ≥ 1
 * @returns shape (3 · count,), unit vectors one after the other
 * @source González (2010), Math. Geosci. 42, 49
 */
export function equalAreaDirections(count: number): Float64Array {
  const out = new Float64Array(3 * count);
  for (let i = 0; i < count; i++) {
    const z = 1 - (2 * i + 1) / count;
    const radius = Math.sqrt(1 - z * z);
    const angle = i * GOLDEN_ANGLE;
    out[3 * i] = radius * Math.cos(angle);
    out[3 * i + 1] = radius * Math.sin(angle);
    out[3 * i + 2] = z;
  }
  return out;
}

const GOLDEN_ANGLE = Math.PI * (3 - Math.sqrt(5));
