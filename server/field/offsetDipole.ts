import type { FieldFunction } from './sphericalHarmonic.ts';

/**
 * Field of a point dipole away from the planet's centre: B = 3 (m·ρ) ρ / ρ⁵ − m / ρ³ with ρ from the dipole.
 *
 * @param moment - shape (3,), nT a³, body-fixed; the vector (g11, h11, g10) of a centred dipole
 * @param centre - shape (3,), reference radii
 */
export function offsetDipoleField(
  moment: readonly [number, number, number],
  centre: readonly [number, number, number],
): FieldFunction {
  const [mx, my, mz] = moment;
  const [cx, cy, cz] = centre;
  return (x, y, z, out) => {
    const rx = x - cx;
    const ry = y - cy;
    const rz = z - cz;
    const inverseR2 = 1 / (rx * rx + ry * ry + rz * rz);
    const inverseR3 = inverseR2 * Math.sqrt(inverseR2);
    const along = 3 * (mx * rx + my * ry + mz * rz) * inverseR2;
    out[0] = (along * rx - mx) * inverseR3;
    out[1] = (along * ry - my) * inverseR3;
    out[2] = (along * rz - mz) * inverseR3;
    return out;
  };
}
