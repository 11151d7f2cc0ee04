import { gaussLegendre } from '../numeric/gaussLegendre.ts';

const NODES = gaussLegendre(24);

/**
 * 4π ∫ (sin α_eq)ⁿ sin α dα over 0 to π/2 outside the loss cone, with sin²α_eq = (B_min/B) sin²α: what turns the
 * equatorial 90° intensity into the omnidirectional flux at a point, in sr.
 *
 * With μ = cos α = sin θ the integrand is cosⁿ⁺¹θ, smooth up to its end at sin²θ_c = 1 − B/B_loss; 24 Gauss nodes
 * give it to 1e-8 for 0 ≤ n ≤ 6.
 *
 * @returns 0 where the point itself lies inside the loss cone (B ≥ B_loss)
 */
export function pitchAngleFactorSr(n: number, bNt: number, bMinNt: number, bLossNt: number): number {
  const open = 1 - bNt / bLossNt;
  if (!(open > 0)) return 0;
  const thetaMax = Math.asin(Math.sqrt(open));
  let sum = 0;
  for (let k = 0; k < NODES.x.length; k++) {
    const theta = 0.5 * thetaMax * (1 + NODES.x[k]);
    sum += NODES.w[k] * Math.cos(theta) ** (n + 1);
  }
  return 4 * Math.PI * (bMinNt / bNt) ** (n / 2) * 0.5 * thetaMax * sum;
}
