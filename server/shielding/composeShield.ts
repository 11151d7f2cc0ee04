import { contentHash } from '../canonical.ts';
import { ELECTRON_EDGES_MEV, PROTON_EDGES_MEV } from '../numeric/spectrumGrid.ts';
import { ENGINE_VERSION } from '../version.ts';
import { REFERENCE_VERSION, referenceDoses, referenceVariances } from './effort.ts';
import { noticesOf, type ResponseOptions, responseKey } from './response.ts';
import {
  type Blend,
  blendOf,
  describeShield,
  firstRays,
  MAX_RAYS,
  NODE_RATIO,
  nodesOf,
  type PathIn,
  pathsIn,
  plainStack,
} from './shieldPlan.ts';
import { aluminiumEquivalentMm, normaliseStack } from './stack.ts';
import type { ShieldInput, ShieldResponse, StackInput } from './types.ts';

const ELECTRON_BINS = ELECTRON_EDGES_MEV.length - 1;
const PROTON_BINS = PROTON_EDGES_MEV.length - 1;
/** Doubling the rays may move the dose of no reference spectrum by more. */
const CONVERGED = 0.01;

const known = new WeakMap<ShieldInput, StackInput[]>();

/** The responses that a shield is put together from, each its own job; one of them for a plain stack. */
export function stacksOf(shield: ShieldInput): StackInput[] {
  let stacks = known.get(shield);
  if (stacks === undefined) {
    const plain = plainStack(shield);
    stacks = plain === null ? nodesOf(shield) : [plain];
    known.set(shield, stacks);
  }
  return stacks;
}

/** Content address of the response of a shield. */
export function shieldKey(shield: ShieldInput, options: ResponseOptions): string {
  const plain = plainStack(shield);
  if (plain !== null) return responseKey(plain, options);
  return contentHash({
    kind: 'composedResponse',
    engineVersion: ENGINE_VERSION,
    referenceVersion: REFERENCE_VERSION,
    ...options,
    shield: JSON.parse(JSON.stringify(shield)) as object,
  });
}

/**
 * Response of a shield from the responses of its stacks, in the order of `stacksOf`: the mean over all ways in, by their
 * share of 4π. Doses are averaged, never thicknesses. Slant paths are interpolated in the logarithms of thickness and
 * response between stacks a factor of 1.3 apart; where one of them lets nothing through, linearly. Rays are doubled until
 * no reference spectrum gives a dose that moves by more than 1 %.
 *
 * Statistical errors are those of the stacks, weighted by how much of the mean each carries; paths that share a stack share
 * its error.
 */
export function composeShield(
  shield: ShieldInput,
  options: ResponseOptions,
  responses: readonly ShieldResponse[],
): ShieldResponse {
  const byKey = new Map(stacksOf(shield).map((stack, index) => [JSON.stringify(stack), responses[index]]));
  let rays = firstRays(shield);
  let mean = meanOver(pathsIn(shield, rays), byKey);
  let moved = 0;
  if (shield.kind === 'box') {
    moved = Number.POSITIVE_INFINITY;
    while (moved > CONVERGED && 2 * rays <= MAX_RAYS) {
      const finer = meanOver(pathsIn(shield, 2 * rays), byKey);
      moved = largestMove(mean, finer);
      mean = finer;
      rays *= 2;
    }
  }
  const [first] = responses;
  const referenceErrorRel = worstRelativeError(mean);
  return {
    sha256: shieldKey(shield, options),
    engineVersion: first.engineVersion,
    effort: options.effort,
    referenceErrorRel,
    targetMaterialId: options.targetMaterialId,
    description: `${describeShield(shield)}; ${howAveraged(shield, rays, moved)}`,
    ...mean,
    notices: noticesOf(describeShield(shield), referenceErrorRel, options.effort),
  };
}

function howAveraged(shield: ShieldInput, rays: number, moved: number): string {
  const of = 'dose averaged over all directions, never thickness';
  if (shield.kind !== 'box') return of;
  return `${of}; ${rays} rays of equal solid angle (half as many move the dose by ${(100 * moved).toPrecision(1)} %); slant paths interpolated between responses a factor of ${NODE_RATIO} apart in thickness`;
}

type Mean = Pick<ShieldResponse, 'electron' | 'proton'>;

function meanOver(paths: readonly PathIn[], byKey: ReadonlyMap<string, ShieldResponse>): Mean {
  const blends = alike(paths.map((path) => blendOf(path, new Map())));
  const electron = (field: keyof ShieldResponse['electron'], sigma?: keyof ShieldResponse['electron']) =>
    blended(blends, ELECTRON_BINS, (key) => {
      const response = found(byKey, key).electron;
      return { values: response[field], sigmas: sigma === undefined ? null : response[sigma] };
    });
  const proton = (field: keyof ShieldResponse['proton']) =>
    blended(blends, PROTON_BINS, (key) => ({ values: found(byKey, key).proton[field], sigmas: null })).values;
  const dose = electron('doseGyCm2', 'doseSigmaGyCm2');
  const photons = electron('bremsstrahlungGyCm2', 'bremsstrahlungSigmaGyCm2');
  const transmitted = electron('transmitted', 'transmittedSigma');
  return {
    electron: {
      doseGyCm2: dose.values,
      doseSigmaGyCm2: dose.sigmas,
      bremsstrahlungGyCm2: photons.values,
      bremsstrahlungSigmaGyCm2: photons.sigmas,
      transmitted: transmitted.values,
      transmittedSigma: transmitted.sigmas,
      damageMeVCm2PerG: electron('damageMeVCm2PerG').values,
    },
    proton: {
      doseGyCm2: proton('doseGyCm2'),
      transmitted: proton('transmitted'),
      damageMeVCm2PerG: proton('damageMeVCm2PerG'),
    },
  };
}

function found(byKey: ReadonlyMap<string, ShieldResponse>, key: string): ShieldResponse {
  const response = byKey.get(key);
  if (response === undefined) throw new TypeError(`no response of ${key}`);
  return response;
}

/** Paths that meet the same thickness come together. */
function alike(blends: readonly Blend[]): Blend[] {
  const merged = new Map<string, Blend>();
  for (const blend of blends) {
    const key = JSON.stringify(blend.nodes.map(({ key: node, share }) => [node, share.toPrecision(9)]));
    const same = merged.get(key);
    merged.set(key, same === undefined ? blend : { ...same, weight: same.weight + blend.weight });
  }
  return [...merged.values()];
}

function blended(
  blends: readonly Blend[],
  bins: number,
  of: (key: string) => { values: Float64Array; sigmas: Float64Array | null },
): { values: Float64Array; sigmas: Float64Array } {
  const values = new Float64Array(bins);
  const carried = new Map<string, Float64Array>();
  const sources = new Map<string, ReturnType<typeof of>>();
  for (const { weight, nodes } of blends) {
    for (const { key } of nodes) {
      if (!sources.has(key)) sources.set(key, of(key));
      if (!carried.has(key)) carried.set(key, new Float64Array(bins));
    }
    const corners = nodes.map(({ key, share }) => ({
      share,
      values: sources.get(key)?.values as Float64Array,
      carried: carried.get(key) as Float64Array,
    }));
    for (let bin = 0; bin < bins; bin++) {
      let sum = 0;
      let logs = 0;
      let all = true;
      for (const corner of corners) {
        const value = corner.values[bin];
        if (value > 0) logs += corner.share * Math.log(value);
        else all = false;
        sum += corner.share * value;
      }
      const value = all ? Math.exp(logs) : sum;
      values[bin] += weight * value;
      // How the mean moves with each response: ∂ ln or ∂ of the interpolation.
      for (const corner of corners) {
        corner.carried[bin] += weight * corner.share * (all ? value / corner.values[bin] : 1);
      }
    }
  }
  const sigmas = new Float64Array(bins);
  for (const [key, slope] of carried) {
    const own = sources.get(key)?.sigmas;
    if (own === null || own === undefined) continue;
    for (let bin = 0; bin < bins; bin++) sigmas[bin] += (slope[bin] * own[bin]) ** 2;
  }
  return { values, sigmas: sigmas.map(Math.sqrt) };
}

function worstRelativeError({ electron }: Mean): number {
  const doses = referenceDoses(electron.doseGyCm2.map((dose, bin) => dose + electron.bremsstrahlungGyCm2[bin]));
  const variances = referenceVariances(
    electron.doseSigmaGyCm2.map((sigma, bin) => sigma ** 2 + electron.bremsstrahlungSigmaGyCm2[bin] ** 2),
  );
  return Math.max(...doses.map((dose, i) => Math.sqrt(variances[i]) / dose));
}

function largestMove(a: Mean, b: Mean): number {
  const total = ({ electron }: Mean) => electron.doseGyCm2.map((dose, bin) => dose + electron.bremsstrahlungGyCm2[bin]);
  const [before, after] = [referenceDoses(total(a)), referenceDoses(total(b))];
  return Math.max(...before.map((dose, i) => Math.abs(dose / after[i] - 1)));
}

/** Steps that aluminium equivalents are gathered in, relative. */
const EQUIVALENT_STEP = 0.02;

/** Aluminium of the same areal density along every way in, with the share of 4π that meets it. */
export function aluminiumEquivalents(shield: ShieldInput): { weight: number; thicknessMm: number }[] {
  const groups = new Map<number, { weight: number; sum: number }>();
  for (const { weight, walls } of pathsIn(shield, firstRays(shield))) {
    const thicknessMm = walls.reduce(
      (sum, { layers, stretch }) => sum + stretch * aluminiumEquivalentMm(normaliseStack({ geometry: 'slab', layers })),
      0,
    );
    const group = Math.round(Math.log(Math.max(thicknessMm, 1e-4)) / EQUIVALENT_STEP);
    const known = groups.get(group) ?? { weight: 0, sum: 0 };
    groups.set(group, { weight: known.weight + weight, sum: known.sum + weight * thicknessMm });
  }
  return [...groups.values()].map(({ weight, sum }) => ({ weight, thicknessMm: sum / weight }));
}
