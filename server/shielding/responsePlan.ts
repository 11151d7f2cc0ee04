import { electronCsdaRange, type Material, material } from '../matter/index.ts';
import type { TransportGeometry, TransportLayer, TransportOptions } from '../transport/geometry.ts';
import { normaliseStack, type Stack } from './stack.ts';
import type { StackInput, TargetMaterialId } from './types.ts';

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

interface Piece {
  readonly material: Material;
  readonly thickness: number;
}

/** What the histories of one electron bin run through, and with which cuts. */
export function transportOf(
  stack: StackInput,
  target: TargetMaterialId,
  energyMeV: number,
): { geometry: TransportGeometry; options: TransportOptions } {
  const checked = normaliseStack(stack);
  return checked.geometry === 'slab'
    ? slabTransport(checked, target, energyMeV)
    : sphereTransport(checked, target, energyMeV);
}

/** Outer radius of a solid sphere about its target, cm. */
export function sphereRadiusCm(stack: Stack): number {
  return 0.1 * (TARGET_MM + stack.layers.reduce((sum, layer) => sum + layer.thicknessMm, 0));
}

/**
 * Draws the direction in which a particle enters a sphere: cosine law, four fifths of the draws aimed at the centre with a
 * density ∝ 1/(sin² + ε), ε the share of the sphere's cross-section that the ball takes up.
 *
 * @param out - shape (2,): cosine to the inward normal, and weight; overwritten
 */
export function aimAtCentre(epsilon: number, u: number, v: number, out: Float64Array): void {
  const span = Math.log1p(1 / epsilon);
  const sine2 = u < AIMED_SHARE ? epsilon * Math.expm1(span * v) : v;
  const density = 1 - AIMED_SHARE + AIMED_SHARE / (span * (sine2 + epsilon));
  out[0] = Math.sqrt(Math.max(1e-12, 1 - sine2));
  out[1] = 1 / density;
}
const AIMED_SHARE = 0.8;

/**
 * A solid sphere about a ball of target. The source is aimed at the centre; where electrons also lose their direction on
 * the way, shells at radii that double from the ball outward are less important each than the one inside, so that those
 * that head for the centre are split on their way.
 */
function sphereTransport(
  { layers, arealDensityGPerCm2: total }: Stack,
  target: TargetMaterialId,
  energyMeV: number,
): { geometry: TransportGeometry; options: TransportOptions } {
  const of = material(target);
  const ball = 0.1 * TARGET_MM;
  const outer = ball + 0.1 * layers.reduce((sum, layer) => sum + layer.thicknessMm, 0);
  const radii: number[] = [];
  for (let radius = 2 * ball; radius < 0.75 * outer; radius *= 2) radii.push(radius);
  const rangeRatio = electronCsdaRange(layers[0].material, energyMeV) / total;
  const step = rangeRatio < 4 ? 4 : rangeRatio < 20 ? 2 : 1;
  const importanceAt = (radius: number) => step ** radii.filter((mark) => mark > radius).length;
  const transport: TransportLayer[] = [
    { material: of, thickness: ball, importance: importanceAt(0), forcing: TARGET_FORCING },
  ];
  let bottom = ball;
  let depth = 0;
  for (const layer of [...layers].reverse()) {
    const density = layer.material.densityGPerCm3;
    const top = bottom + 0.1 * layer.thicknessMm;
    const zone = bottom + (ZONE_G_PER_CM2 - depth) / density;
    const inside = [...radii, zone].filter((at) => at > bottom * (1 + 1e-9) && at < top * (1 - 1e-9));
    let from = bottom;
    for (const cut of [...inside.sort((a, b) => a - b), top]) {
      const middle = 0.5 * (from + cut);
      transport.push({
        material: layer.material,
        thickness: cut - from,
        importance: importanceAt(middle),
        forcing: middle < zone ? ZONE_FORCING : 1,
      });
      from = cut;
    }
    depth += layer.arealDensityGPerCm2;
    bottom = top;
  }
  return {
    geometry: { spherical: true, layers: transport, target: 0 },
    options: { ...cutsFor(energyMeV), photons: true, survival: 0.25, photonSplit: rangeRatio > 0.8 ? 2 : 8, bins: 0 },
  };
}

function slabTransport(
  { layers, backing, arealDensityGPerCm2: total }: Stack,
  target: TargetMaterialId,
  energyMeV: number,
): { geometry: TransportGeometry; options: TransportOptions } {
  const pieces: Piece[] = layers.map((layer) => ({ material: layer.material, thickness: layer.arealDensityGPerCm2 }));
  const outermost = pieces[0].material;
  const rangeRatio = electronCsdaRange(outermost, energyMeV) / total;
  const split = rangeRatio < SPLIT_BELOW_RANGE;
  const marks = split ? SPLIT_DEPTHS.map((share) => share * total) : [];
  const zone = Math.max(0, total - ZONE_G_PER_CM2);
  const cuts = [...marks, zone].sort((a, b) => a - b);
  const transport: TransportLayer[] = [];
  let top = 0;
  for (const piece of pieces) {
    const bottom = top + piece.thickness;
    let from = top;
    for (const cut of [...cuts.filter((at) => at > top * (1 + 1e-9) && at < bottom * (1 - 1e-9)), bottom]) {
      const middle = 0.5 * (from + cut);
      transport.push({
        material: piece.material,
        thickness: cut - from,
        importance: 2 ** marks.filter((mark) => mark < middle).length,
        forcing: middle > zone ? ZONE_FORCING : 1,
      });
      from = cut;
    }
    top = bottom;
  }
  const importance = 2 ** marks.length;
  const of = material(target);
  const targetIndex = transport.length;
  transport.push({
    material: of,
    thickness: 0.1 * TARGET_MM * of.densityGPerCm3,
    importance,
    forcing: TARGET_FORCING,
  });
  if (backing === 'same') {
    const last = pieces[pieces.length - 1].material;
    transport.push({ material: last, thickness: ZONE_G_PER_CM2, importance, forcing: ZONE_FORCING });
    transport.push({ material: last, thickness: BACKING_G_PER_CM2 - ZONE_G_PER_CM2, importance, forcing: 1 });
  }
  return {
    geometry: { spherical: false, layers: transport, target: targetIndex },
    options: { ...cutsFor(energyMeV), photons: true, survival: 0.25, photonSplit: rangeRatio < 1.2 ? 12 : 4, bins: 0 },
  };
}

/** Cuts that keep what happens below them inside the target and the last layers of the shield. */
export function cutsFor(energyMeV: number): { cutMeV: number; absorbMeV: number } {
  if (energyMeV < 0.1) return { cutMeV: 0.004, absorbMeV: 0.004 };
  if (energyMeV < 0.5) return { cutMeV: 0.01, absorbMeV: 0.01 };
  return energyMeV < 10 ? { cutMeV: 0.02, absorbMeV: 0.02 } : { cutMeV: 0.04, absorbMeV: 0.02 };
}
