import type { PlanetId } from '../constants/planets.ts';
import { neptuneBelts } from './neptune.ts';
import type { BeltTable, BeltTableBlock } from './tableTypes.ts';
import type { BeltModel } from './types.ts';
import { uranusBelts } from './uranus.ts';

const RADIAN_PER_DEG = Math.PI / 180;

/**
 * Belts from an uploaded table that `checkBeltTable` has accepted.
 *
 * Between the nodes ln j goes linearly in ln L and ln E at each pitch angle of the table (j itself, where a corner is
 * zero), and j linearly in the sine of the equatorial pitch angle. Nothing lies outside the axes. With j linear in the
 * sine the integral over pitch angle is in closed form, so `omnidirectionalInto` is exact for what `directional` says.
 *
 * What was measured does not change with a table: evidence regions are those of the planet. A table with `sigmaDex`
 * brings the whole spread (σ₀ its least value, no further energy term); without it that of the built-in belts applies,
 * so that a table never looks surer for leaving its spread out.
 *
 * @param id - under which the table is stored
 */
export function tableBelts(id: string, table: BeltTable): BeltModel {
  const builtIn = builtInBelts(table.planet);
  const grids = {
    electron: table.species.electron === undefined ? null : new Grid(table.species.electron),
    proton: table.species.proton === undefined ? null : new Grid(table.species.proton),
  };
  const present = [grids.electron, grids.proton].filter((grid) => grid !== null);
  const lMin = Math.min(...present.map((grid) => grid.lMin));
  const lMax = Math.max(...present.map((grid) => grid.lMax));
  const breaks = [...builtIn.lBreaks, ...present.flatMap((grid) => [grid.lMin, grid.lMax, ...grid.leastSigmaL])];
  return {
    id,
    planet: table.planet,
    label: table.name,
    source: table.source,
    species: (['electron', 'proton'] as const).filter((species) => grids[species] !== null),
    lMin,
    lMax,
    lBreaks: [...new Set(breaks.filter((l) => l > lMin && l < lMax))].sort((a, b) => a - b),
    directional: (species, energyMeV, lShell, sinSquaredEquatorialPitch) =>
      grids[species]?.directional(energyMeV, lShell, Math.sqrt(sinSquaredEquatorialPitch)) ?? 0,
    omnidirectionalInto(species, lShell, bNt, bMinNt, bLossNt, energiesMeV, out) {
      out.fill(0);
      grids[species]?.addOmnidirectional(lShell, bNt, bMinNt, bLossNt, energiesMeV, out);
      return out;
    },
    region: (species, lShell, energyMeV) => builtIn.region(species, lShell, energyMeV),
    spread(species, lShell) {
      const grid = grids[species];
      if (grid === null || grid.leastSigmaL.length === 0) return builtIn.spread(species, lShell);
      const [anchorL] = grid.leastSigmaL;
      return {
        sigmaDex: grid.sigmaDex(lShell),
        side: lShell < anchorL ? 'inside' : lShell > anchorL ? 'outside' : 'anchor',
      };
    },
    sharedSigmaDex: (species) => grids[species]?.leastSigmaDex ?? builtIn.sharedSigmaDex(species),
    energySigmaDex: (species, energyMeV) =>
      grids[species]?.leastSigmaDex === undefined ? builtIn.energySigmaDex(species, energyMeV) : 0,
  };
}

function builtInBelts(planet: PlanetId): BeltModel {
  return planet === 'uranus' ? uranusBelts() : neptuneBelts();
}

/** One species on its axes. */
class Grid {
  readonly lMin: number;
  readonly lMax: number;
  /** L of the least spread; empty without a spread of its own. */
  readonly leastSigmaL: readonly number[];
  readonly leastSigmaDex: number | undefined;
  private readonly lnL: Float64Array;
  private readonly lnE: Float64Array;
  private readonly sines: Float64Array;
  private readonly sigmas: readonly number[];
  /** Index (l · nPitch + pitch) · nE + e, cm⁻² s⁻¹ sr⁻¹ MeV⁻¹, and its logarithm. */
  private readonly values: Float64Array;
  private readonly logs: Float64Array;
  private readonly weights: Float64Array;
  private readonly corner = { l: 0, lShare: 0, e: 0, eShare: 0 };

  constructor(block: BeltTableBlock) {
    this.lMin = block.lShells[0];
    this.lMax = block.lShells[block.lShells.length - 1];
    this.lnL = Float64Array.from(block.lShells, Math.log);
    this.lnE = Float64Array.from(block.energiesMeV, Math.log);
    this.sines = Float64Array.from(block.equatorialPitchAnglesDeg, (deg) => Math.sin(deg * RADIAN_PER_DEG));
    this.values = Float64Array.from(block.intensityPerCm2SSrMeV.flat(2));
    this.logs = this.values.map(Math.log);
    this.weights = new Float64Array(this.sines.length);
    this.sigmas = block.sigmaDex ?? [];
    const least = this.sigmas.length === 0 ? undefined : Math.min(...this.sigmas);
    this.leastSigmaDex = least;
    this.leastSigmaL = least === undefined ? [] : [block.lShells[this.sigmas.indexOf(least)]];
  }

  directional(energyMeV: number, lShell: number, sine: number): number {
    const { sines } = this;
    const last = sines.length - 1;
    if (!(sine >= sines[0]) || !this.placeL(lShell) || !this.placeE(energyMeV)) return 0;
    let m = 0;
    while (m < last - 1 && sines[m + 1] < sine) m += 1;
    const share = Math.min(1, (sine - sines[m]) / (sines[m + 1] - sines[m]));
    return (1 - share) * this.atPitch(m) + share * this.atPitch(m + 1);
  }

  addOmnidirectional(
    lShell: number,
    bNt: number,
    bMinNt: number,
    bLossNt: number,
    energiesMeV: Float64Array,
    out: Float64Array,
  ): void {
    const open = 1 - bNt / bLossNt;
    if (!(open > 0) || !this.placeL(lShell)) return;
    this.pitchWeights(Math.sqrt(bMinNt / bNt), Math.asin(Math.sqrt(open)));
    for (let i = 0; i < energiesMeV.length; i++) {
      if (!this.placeE(energiesMeV[i])) continue;
      let sum = 0;
      for (let m = 0; m < this.weights.length; m++) if (this.weights[m] !== 0) sum += this.weights[m] * this.atPitch(m);
      out[i] += sum;
    }
  }

  sigmaDex(lShell: number): number {
    this.placeL(Math.min(Math.max(lShell, this.lMin), this.lMax));
    const { l, lShare } = this.corner;
    return this.sigmas[l] + lShare * (this.sigmas[l + 1] - this.sigmas[l]);
  }

  /**
   * Weights of the pitch angles of the table in 4π ∫ j cos θ dθ, with sin α = cos θ and sin α_eq = k cos θ: between two
   * sines s₀ and s₁ the hat functions are linear in cos θ, and ∫ (a + b cos θ) cos θ dθ = a sin θ + b (θ/2 + sin 2θ/4).
   */
  private pitchWeights(k: number, thetaMax: number): void {
    const { sines, weights } = this;
    weights.fill(0);
    const thetaAt = (sine: number) => Math.min(thetaMax, Math.acos(Math.min(1, sine / k)));
    for (let m = 0; m + 1 < sines.length; m++) {
      const from = thetaAt(sines[m + 1]);
      const to = thetaAt(sines[m]);
      if (!(to > from)) continue;
      const first = Math.sin(to) - Math.sin(from);
      const second = k * (0.5 * (to - from) + 0.25 * (Math.sin(2 * to) - Math.sin(2 * from)));
      const width = sines[m + 1] - sines[m];
      weights[m] += (4 * Math.PI * (sines[m + 1] * first - second)) / width;
      weights[m + 1] += (4 * Math.PI * (second - sines[m] * first)) / width;
    }
  }

  private placeL(lShell: number): boolean {
    if (!(lShell >= this.lMin && lShell <= this.lMax)) return false;
    const at = Math.log(lShell);
    const { lnL, corner } = this;
    let l = 0;
    while (l < lnL.length - 2 && lnL[l + 1] < at) l += 1;
    corner.l = l;
    corner.lShare = Math.min(1, Math.max(0, (at - lnL[l]) / (lnL[l + 1] - lnL[l])));
    return true;
  }

  private placeE(energyMeV: number): boolean {
    const { lnE, corner } = this;
    const at = Math.log(energyMeV);
    const last = lnE.length - 1;
    if (!(at >= lnE[0] && at <= lnE[last])) return false;
    let e = 0;
    while (e < last - 1 && lnE[e + 1] < at) e += 1;
    corner.e = e;
    corner.eShare = (at - lnE[e]) / (lnE[e + 1] - lnE[e]);
    return true;
  }

  /** Intensity at one pitch angle of the table, at the place set by `placeL` and `placeE`. */
  private atPitch(m: number): number {
    const { values, logs } = this;
    const { l, lShare, e, eShare } = this.corner;
    const nE = this.lnE.length;
    const low = (l * this.sines.length + m) * nE + e;
    const high = low + this.sines.length * nE;
    const positive = values[low] > 0 && values[low + 1] > 0 && values[high] > 0 && values[high + 1] > 0;
    const from = positive ? logs : values;
    const inner = from[low] + eShare * (from[low + 1] - from[low]);
    const outer = from[high] + eShare * (from[high + 1] - from[high]);
    const mixed = inner + lShare * (outer - inner);
    return positive ? Math.exp(mixed) : mixed;
  }
}
