import { offsetDipoleField } from './offsetDipole.ts';
import type { FieldModel } from './types.ts';

/** Far enough out for the quadrupole to be all that is left beside the dipole, reference radii. */
const FIT_RADIUS = 200;
const FIT_POINTS = 400;
const DIFFERENCE_STEP = 0.01;

const cache = new Map<FieldModel, Float64Array>();

/**
 * Centre of the displaced dipole that follows the model best far out, reference radii, body-fixed, shape (3,): linear
 * least squares of B(x) − B_dip(x) = −(c·∇)B_dip(x) over a sphere, which leaves as little quadrupole as can be left.
 *
 * @source The eccentric dipole of Schmidt (1934) as in Fraser-Smith (1987), Rev. Geophys. 25, 1; here fitted, not expanded
 */
export function eccentricCentre(model: FieldModel): Float64Array {
  let centre = cache.get(model);
  if (centre === undefined) {
    centre = fitCentre(model);
    cache.set(model, centre);
  }
  return centre;
}

function fitCentre(model: FieldModel): Float64Array {
  const [mx, my, mz] = Array.from(model.dipoleAxis, (component) => component * model.dipoleMomentNt);
  const moment = [mx, my, mz] as const;
  const h = DIFFERENCE_STEP * FIT_RADIUS;
  const shifted = [0, 1, 2].map((axis) =>
    [1, -1].map((sign) =>
      offsetDipoleField(moment, [axis === 0 ? sign * h : 0, axis === 1 ? sign * h : 0, axis === 2 ? sign * h : 0]),
    ),
  );
  const centred = offsetDipoleField(moment, [0, 0, 0]);
  const normal = new Float64Array(9);
  const right = new Float64Array(3);
  const b = new Float64Array(3);
  const dipole = new Float64Array(3);
  const plus = new Float64Array(3);
  const minus = new Float64Array(3);
  const gradient = new Float64Array(9);
  for (let i = 0; i < FIT_POINTS; i++) {
    // Equal-area spiral.
    const cosine = 1 - (2 * (i + 0.5)) / FIT_POINTS;
    const sine = Math.sqrt(1 - cosine * cosine);
    const longitude = i * Math.PI * (3 - Math.sqrt(5));
    const x = FIT_RADIUS * sine * Math.cos(longitude);
    const y = FIT_RADIUS * sine * Math.sin(longitude);
    const z = FIT_RADIUS * cosine;
    model.fieldInto(x, y, z, b);
    centred(x, y, z, dipole);
    for (let axis = 0; axis < 3; axis++) {
      shifted[axis][0](x, y, z, plus);
      shifted[axis][1](x, y, z, minus);
      for (let c = 0; c < 3; c++) gradient[3 * axis + c] = (plus[c] - minus[c]) / (2 * h);
    }
    for (let p = 0; p < 3; p++) {
      for (let c = 0; c < 3; c++) {
        right[p] += gradient[3 * p + c] * (b[c] - dipole[c]);
        for (let q = 0; q < 3; q++) normal[3 * p + q] += gradient[3 * p + c] * gradient[3 * q + c];
      }
    }
  }
  return solve3(normal, right);
}

/** Cramer's rule: the normal matrix of a dipole's gradient is well conditioned. */
function solve3(a: Float64Array, r: Float64Array): Float64Array {
  const determinant = (m: ArrayLike<number>) =>
    m[0] * (m[4] * m[8] - m[5] * m[7]) - m[1] * (m[3] * m[8] - m[5] * m[6]) + m[2] * (m[3] * m[7] - m[4] * m[6]);
  const whole = determinant(a);
  return Float64Array.from([0, 1, 2], (column) => {
    const replaced = Array.from(a);
    for (let row = 0; row < 3; row++) replaced[3 * row + column] = r[row];
    return determinant(replaced) / whole;
  });
}
