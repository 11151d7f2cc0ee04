import { electronCsdaRange, material } from '../matter/index.ts';
import type { TransportGeometry, TransportLayer, TransportOptions } from '../transport/geometry.ts';
import { CAVITY_SINE } from '../transport/kernel.ts';
import { hardRates } from '../transport/tables.ts';
import type { Stack } from './stack.ts';
import type { TargetMaterialId } from './types.ts';

/** Target: a layer this thick behind slabs, a ball of this radius at the centre of spheres and shells, mm. */
export const TARGET_MM = 0.1;
/** Depth of the backing of a backed slab, g/cm²: all that scatters back into the target. */
const BACKING_G_PER_CM2 = 5;
/** Part of the shield next to the target in which photon collisions are forced: range of most of their electrons, g/cm². */
const ZONE_G_PER_CM2 = 0.4;
const ZONE_FORCING = 8;
/** Photon collisions in the target happen this many times as often. */
const TARGET_FORCING = 64;
/** Shield depths, as shares of its thickness, from which particles are twice as important as before. */
const SPLIT_DEPTHS = [0.3, 0.5, 0.7, 0.85];
/** Electrons whose range is below this many shield thicknesses are split on their way. */
const SPLIT_BELOW_RANGE = 2.5;

/** What the histories of one electron bin run through, and with which cuts. */
export function transportOf(
  stack: Stack,
  target: TargetMaterialId,
  energyMeV: number,
): { geometry: TransportGeometry; options: TransportOptions } {
  switch (stack.geometry) {
    case 'slab':
      return slabTransport(stack, target, energyMeV);
    case 'sphere':
      return sphereTransport(stack, target, energyMeV);
    case 'shell':
      return shellTransport(stack, target, energyMeV);
  }
}

/** Mean atomic numbers by mass between which matter in front of the target gives it the electrons that silicon would. */
const LIKE_TARGET_Z = [10, 15] as const;

/**
 * Whether the photon dose may count by kerma: at least one range of the bin's electrons of matter like the target's lies
 * about it, so that the electrons which photons set free are in equilibrium there. Open slabs have none behind, and gallium arsenide
 * has more electrons of its own than aluminium would give it.
 */
function kermaHolds({ geometry, backing, layers }: Stack, target: TargetMaterialId, energyMeV: number): boolean {
  if (target === 'GaAs' || (geometry === 'slab' && backing === 'none')) return false;
  let facing = 0;
  for (let i = layers.length - 1; i >= 0; i--) {
    const z = layers[i].material.constituents.reduce((sum, part) => sum + part.massFraction * part.z, 0);
    if (z < LIKE_TARGET_Z[0] || z > LIKE_TARGET_Z[1]) break;
    facing += layers[i].arealDensityGPerCm2;
  }
  return facing > 0 && facing >= electronCsdaRange(layers[layers.length - 1].material, energyMeV);
}

/** Outer radius of a solid sphere about its target, or of a shell, cm. */
export function sphereRadiusCm(stack: Stack): number {
  const inside = stack.innerRadiusMm ?? TARGET_MM;
  return 0.1 * (inside + stack.layers.reduce((sum, layer) => sum + layer.thicknessMm, 0));
}

/** Sine squared within which a particle is aimed at: the ball, or the cone that a cavity looks at. */
export function aimSpread(stack: Stack): number {
  const aimed = stack.geometry === 'shell' ? CAVITY_SINE * (stack.innerRadiusMm ?? 0) : TARGET_MM;
  return (0.1 * aimed) ** 2 / sphereRadiusCm(stack) ** 2;
}

/**
 * Draws the direction in which a particle enters a sphere: cosine law, a share of the draws aimed at the centre with a
 * density ∝ 1/(sin² + ε), ε the share of the sphere's cross-section that the ball takes up.
 *
 * @param out - shape (2,): cosine to the inward normal, and weight; overwritten
 */
export function aimAtCentre(epsilon: number, share: number, u: number, v: number, out: Float64Array): void {
  const span = Math.log1p(1 / epsilon);
  const sine2 = u < share ? epsilon * Math.expm1(span * v) : v;
  const density = 1 - share + share / (span * (sine2 + epsilon));
  out[0] = Math.sqrt(Math.max(1e-12, 1 - sine2));
  out[1] = 1 / density;
}

/** Share of the draws that are aimed: little is gained by it where only photons come through. */
export function aimedShare(stack: Stack, energyMeV: number): number {
  const range = electronCsdaRange(stack.layers[0].material, energyMeV);
  return range < stack.arealDensityGPerCm2 ? AIMED_SHARES.stopped : AIMED_SHARES.through;
}
const AIMED_SHARES = { stopped: 0.2, through: 0.8 };

/**
 * A solid sphere about a ball of target. The source is aimed at the centre; where electrons also lose their direction on
 * the way, shells at radii that double from the ball outward are less important each than the one inside, so that those
 * that head for the centre are split on their way.
 */
function sphereTransport(
  stack: Stack,
  target: TargetMaterialId,
  energyMeV: number,
): { geometry: TransportGeometry; options: TransportOptions } {
  const { layers, arealDensityGPerCm2: total } = stack;
  const ball = 0.1 * TARGET_MM;
  const outer = sphereRadiusCm(stack);
  const radii: number[] = [];
  for (let radius = 2 * ball; radius < 0.75 * outer; radius *= 2) radii.push(radius);
  const rangeRatio = electronCsdaRange(layers[0].material, energyMeV) / total;
  const step = rangeRatio < 4 ? 4 : rangeRatio < 20 ? 2 : 1;
  const kerma = kermaHolds(stack, target, energyMeV);
  const within = (radius: number) => radii.filter((mark) => mark > radius).length;
  const importances = (radius: number) => ({
    importance: step ** within(radius),
    // Photons that count by expectation do so with 1/r² at every scattering: the nearer ones must be more, and weigh less.
    ...(kerma ? { photonImportance: 2 ** within(radius) } : {}),
  });
  const transport: TransportLayer[] = [
    { material: material(target), thickness: ball, ...importances(0), forcing: kerma ? 1 : TARGET_FORCING },
  ];
  let bottom = ball;
  let depth = 0;
  for (const layer of [...layers].reverse()) {
    const top = bottom + 0.1 * layer.thicknessMm;
    const zone = kerma ? 0 : bottom + (ZONE_G_PER_CM2 - depth) / layer.material.densityGPerCm3;
    for (const { from, to } of pieces(bottom, top, [...radii, zone])) {
      const middle = 0.5 * (from + to);
      transport.push({
        material: layer.material,
        thickness: to - from,
        ...importances(middle),
        forcing: middle < zone ? ZONE_FORCING : 1,
      });
    }
    depth += layer.arealDensityGPerCm2;
    bottom = top;
  }
  return {
    geometry: { spherical: true, layers: transport, target: 0 },
    options: optionsFor(stack, energyMeV, kerma),
  };
}

/**
 * A shell about an empty cavity with a ball of target at its centre. Electrons that slow down in the shell are split on
 * their way inward, as in slabs; the cavity turns what crosses it near the centre into what meets the ball.
 */
function shellTransport(
  stack: Stack,
  target: TargetMaterialId,
  energyMeV: number,
): { geometry: TransportGeometry; options: TransportOptions } {
  const { layers, innerRadiusMm, arealDensityGPerCm2: total } = stack;
  const ball = 0.1 * TARGET_MM;
  const inner = 0.1 * (innerRadiusMm ?? 0);
  const rangeRatio = electronCsdaRange(layers[0].material, energyMeV) / total;
  const marks = rangeRatio < SPLIT_BELOW_RANGE ? SPLIT_DEPTHS.map((share) => (1 - share) * total) : [];
  const kerma = kermaHolds(stack, target, energyMeV);
  // Photons that count by expectation need no help on their way.
  const forPhotons = kerma ? { photonImportance: 1 } : {};
  const importances = (depth: number) => ({
    importance: 2 ** marks.filter((mark) => mark > depth).length,
    ...forPhotons,
  });
  const transport: TransportLayer[] = [
    { material: material(target), thickness: ball, ...importances(0), forcing: kerma ? 1 : TARGET_FORCING },
    { material: null, thickness: inner - ball, ...importances(0), forcing: 1 },
  ];
  let bottom = 0;
  for (const layer of [...layers].reverse()) {
    const top = bottom + layer.arealDensityGPerCm2;
    for (const { from, to } of pieces(bottom, top, [...marks, kerma ? 0 : ZONE_G_PER_CM2])) {
      const middle = 0.5 * (from + to);
      transport.push({
        material: layer.material,
        thickness: (to - from) / layer.material.densityGPerCm3,
        ...importances(middle),
        forcing: !kerma && middle < ZONE_G_PER_CM2 ? ZONE_FORCING : 1,
      });
    }
    bottom = top;
  }
  return {
    geometry: { spherical: true, layers: transport, target: 0 },
    options: optionsFor(stack, energyMeV, kerma),
  };
}

/** The stretches into which `cuts` divide a layer, ascending. */
function pieces(bottom: number, top: number, cuts: readonly number[]): { from: number; to: number }[] {
  const inside = cuts.filter((at) => at > bottom * (1 + 1e-9) && at > 0 && at < top * (1 - 1e-9));
  const edges = [bottom, ...inside.sort((a, b) => a - b), top];
  return edges.slice(1).map((to, i) => ({ from: edges[i], to }));
}

function slabTransport(
  stack: Stack,
  target: TargetMaterialId,
  energyMeV: number,
): { geometry: TransportGeometry; options: TransportOptions } {
  const { layers, backing, arealDensityGPerCm2: total } = stack;
  const rangeRatio = electronCsdaRange(layers[0].material, energyMeV) / total;
  const marks = rangeRatio < SPLIT_BELOW_RANGE ? SPLIT_DEPTHS.map((share) => share * total) : [];
  const kerma = kermaHolds(stack, target, energyMeV);
  const zone = kerma ? total : Math.max(0, total - ZONE_G_PER_CM2);
  const forPhotons = kerma ? { photonImportance: 1 } : {};
  const transport: TransportLayer[] = [];
  let top = 0;
  for (const layer of layers) {
    const bottom = top + layer.arealDensityGPerCm2;
    for (const { from, to } of pieces(top, bottom, [...marks, zone])) {
      const middle = 0.5 * (from + to);
      transport.push({
        material: layer.material,
        thickness: to - from,
        importance: 2 ** marks.filter((mark) => mark < middle).length,
        ...forPhotons,
        forcing: middle > zone ? ZONE_FORCING : 1,
      });
    }
    top = bottom;
  }
  const innermost = { importance: 2 ** marks.length, ...forPhotons };
  const of = material(target);
  const targetIndex = transport.length;
  const thickness = 0.1 * TARGET_MM * of.densityGPerCm3;
  transport.push({ material: of, thickness, ...innermost, forcing: kerma ? 1 : TARGET_FORCING });
  if (backing === 'same') {
    const last = layers[layers.length - 1].material;
    const forcing = kerma ? 1 : ZONE_FORCING;
    transport.push({ material: last, thickness: ZONE_G_PER_CM2, ...innermost, forcing });
    transport.push({ material: last, thickness: BACKING_G_PER_CM2 - ZONE_G_PER_CM2, ...innermost, forcing: 1 });
  }
  return {
    geometry: { spherical: false, layers: transport, target: targetIndex },
    options: optionsFor(stack, energyMeV, kerma),
  };
}

/** Electrons below this share of the energy that entered stop at once where they cannot leave their layer. */
const STAY_SHARE = 0.05;
/** Odds of survival of electrons that cannot reach the target. */
const SURVIVAL = 0.25;

/**
 * Electrons radiate this many times as often as they are scattered through large angles, and at most so many times as often
 * as in nature. Photons that count by their electrons are dearer than those that count by expectation.
 */
const FORCED_RADIATION = { kerma: { perScattering: 0.5, most: 1000 }, electrons: { perScattering: 0.05, most: 50 } };

/** Cuts that keep what happens below them inside the target and the last layers of the shield. */
function optionsFor({ layers }: Stack, energyMeV: number, kerma: boolean): TransportOptions {
  const [cutMeV, absorbMeV] =
    energyMeV < 0.1 ? [0.004, 0.004] : energyMeV < 0.5 ? [0.01, 0.01] : energyMeV < 10 ? [0.02, 0.02] : [0.04, 0.02];
  const { elastic, brems } = hardRates(layers[0].material, energyMeV, cutMeV);
  const { perScattering, most } = kerma ? FORCED_RADIATION.kerma : FORCED_RADIATION.electrons;
  const radiativeForcing = Math.min(most, Math.max(1, (perScattering * elastic) / brems));
  return {
    cutMeV,
    absorbMeV,
    photons: true,
    survival: SURVIVAL,
    radiativeForcing,
    stayShare: STAY_SHARE,
    kerma,
    bins: 0,
  };
}
