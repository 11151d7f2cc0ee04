import { AppError, type ErrorPlace } from '../errors.ts';
import { type Material, material } from '../matter/index.ts';
import { RADIAN_PER_DEG } from '../units.ts';
import {
  ACCOUNTED,
  BACK_ENERGY,
  BACK_NUMBER,
  ELECTRON,
  Kernel,
  PHOTON,
  THROUGH_ENERGY,
  THROUGH_NUMBER,
} from './kernel.ts';
import { protonBeam } from './protonBeam.ts';

/** A broad beam on a stack of slabs. */
export interface BeamCase {
  readonly particle: 'electron' | 'photon' | 'proton';
  readonly energyMeV: number;
  /** Angle to the inward normal, or the cosine law of an isotropic fluence. */
  readonly incidence: { readonly angleDeg: number } | 'cosine';
  readonly layers: readonly { readonly materialId: string; readonly thicknessGPerCm2: number }[];
  readonly bins: number;
  readonly histories: number;
  readonly seed: number;
  /** False leaves out the photons that electrons make: their energy leaves the balance where they start. */
  readonly photons: boolean;
}

/** Per incident particle. Backscatter and transmission count all charged particles (photons of a photon beam) above 5 keV. */
export interface BeamResult {
  readonly numberBackscatter: number;
  readonly energyBackscatter: number;
  readonly numberTransmission: number;
  readonly energyTransmission: number;
  /** Everything deposited or gone over the energy brought in. */
  readonly energyBalance: number;
  /** Middles of the bins. */
  readonly depthGPerCm2: readonly number[];
  readonly doseMeVCm2PerG: readonly number[];
  /** 1 σ of the dose, MeV cm²/g. */
  readonly doseSigma: readonly number[];
  /** Net electrons stopped, per g/cm². */
  readonly chargePerGPerCm2: readonly number[];
  readonly historiesPerS: number;
  readonly nsPerStep: number;
}

export interface BeamLayer {
  readonly material: Material;
  readonly thickness: number;
}

const ENERGY_LIMITS_MEV = { electron: [0.02, 100], photon: [0.01, 100], proton: [0.01, 1000] } as const;
const MAX_BINS = 4096;
const MAX_HISTORIES = 1e8;
const MAX_LAYERS = 20;
const MAX_THICKNESS_G_PER_CM2 = 200;
/** Deposits are resolved down to here; secondaries of lesser energy stay where they start, MeV. */
const ABSORB_MEV = 0.005;
/** Losses above are drawn one by one: this share of the energy between the two limits, MeV. */
const CUT_SHARE = 0.01;
const CUT_LIMITS_MEV = [0.005, 0.05] as const;
/** Electrons below this share of the beam energy stop where they cannot leave their layer or their depth bin. */
const STAY_SHARE = 0.05;

/**
 * Runs one beam case, every particle followed without weights.
 *
 * @param clockMs - a clock for the two timings
 * @throws {AppError} BEAM_INVALID naming each field outside its limits; MATERIAL_UNKNOWN
 */
export function runBeam(input: BeamCase, clockMs: () => number): BeamResult {
  const layers = checkedLayers(input);
  const { particle, energyMeV, incidence, bins, histories, seed } = input;
  const cosine = incidence === 'cosine' ? 0 : Math.cos(incidence.angleDeg * RADIAN_PER_DEG);
  const started = clockMs();
  if (particle === 'proton') return protonBeam(layers, energyMeV, cosine, bins, () => clockMs() - started);
  const cutMeV = Math.min(Math.max(CUT_SHARE * energyMeV, CUT_LIMITS_MEV[0]), CUT_LIMITS_MEV[1]);
  const kernel = new Kernel(
    {
      spherical: false,
      target: -1,
      layers: layers.map((layer) => ({ ...layer, importance: 1, forcing: 1 })),
    },
    {
      cutMeV,
      absorbMeV: ABSORB_MEV,
      photons: input.photons,
      survival: 1,
      radiativeForcing: 1,
      stayShare: STAY_SHARE,
      kerma: false,
      bins,
    },
  );
  const { generator, score, binEnergy, binCharge } = kernel;
  generator.start(seed, 0, 0);
  const dose = new Float64Array(bins);
  const square = new Float64Array(bins);
  const charge = new Float64Array(bins);
  const sums = new Float64Array(score.length);
  const kind = particle === 'electron' ? ELECTRON : PHOTON;
  const began = clockMs();
  for (let i = 0; i < histories; i++) {
    kernel.history(kind, energyMeV, cosine === 0 ? Math.sqrt(generator.next()) : cosine);
    for (let b = 0; b < bins; b++) {
      dose[b] += binEnergy[b];
      square[b] += binEnergy[b] * binEnergy[b];
      charge[b] += binCharge[b];
    }
    for (let k = 0; k < sums.length; k++) sums[k] += score[k];
  }
  const seconds = (clockMs() - began) / 1000;
  const width = layers.reduce((sum, layer) => sum + layer.thickness, 0) / bins;
  const per = (slot: number) => sums[slot] / histories;
  return {
    numberBackscatter: per(BACK_NUMBER),
    energyBackscatter: per(BACK_ENERGY) / energyMeV,
    numberTransmission: per(THROUGH_NUMBER),
    energyTransmission: per(THROUGH_ENERGY) / energyMeV,
    energyBalance: per(ACCOUNTED) / energyMeV,
    depthGPerCm2: Array.from(dose, (_, b) => (b + 0.5) * width),
    doseMeVCm2PerG: Array.from(dose, (value) => value / (histories * width)),
    doseSigma: Array.from(
      dose,
      (value, b) =>
        Math.sqrt(Math.max(0, square[b] / histories - (value / histories) ** 2) / Math.max(1, histories - 1)) / width,
    ),
    chargePerGPerCm2: Array.from(charge, (value) => value / (histories * width)),
    historiesPerS: histories / seconds,
    nsPerStep: (seconds * 1e9) / Math.max(1, kernel.steps),
  };
}

function checkedLayers(input: BeamCase): BeamLayer[] {
  const places: ErrorPlace[] = [];
  const refuse = (pointer: string, detail: string, got: unknown, limit: string | number, unit?: string) =>
    places.push({ pointer, detail, got: String(got), limit, ...(unit === undefined ? {} : { unit }) });
  const limits = ENERGY_LIMITS_MEV[input.particle];
  if (limits === undefined) refuse('#/particle', 'unknown particle', input.particle, 'electron, photon or proton');
  else if (!(input.energyMeV >= limits[0] && input.energyMeV <= limits[1])) {
    refuse(
      '#/energyMeV',
      `${input.particle} energies are ${limits[0]} to ${limits[1]} MeV`,
      input.energyMeV,
      limits[1],
      'MeV',
    );
  }
  const angle = input.incidence === 'cosine' ? 0 : input.incidence?.angleDeg;
  if (!(angle >= 0 && angle < 90))
    refuse('#/incidence', 'cosine, or an angleDeg from 0 to below 90', angle, 90, 'degree');
  if (!(Number.isInteger(input.bins) && input.bins >= 1 && input.bins <= MAX_BINS)) {
    refuse('#/bins', `1 to ${MAX_BINS} depth bins`, input.bins, MAX_BINS);
  }
  if (!(Number.isInteger(input.histories) && input.histories >= 1 && input.histories <= MAX_HISTORIES)) {
    refuse('#/histories', `1 to ${MAX_HISTORIES} histories`, input.histories, MAX_HISTORIES);
  }
  if (!Number.isInteger(input.seed)) refuse('#/seed', 'a whole number', input.seed, 'integer');
  const given = Array.isArray(input.layers) ? input.layers : [];
  if (given.length === 0 || given.length > MAX_LAYERS) {
    refuse('#/layers', `1 to ${MAX_LAYERS} layers`, given.length, MAX_LAYERS);
  }
  let total = 0;
  for (const [index, layer] of given.entries()) {
    total += layer.thicknessGPerCm2;
    if (!(layer.thicknessGPerCm2 > 0)) {
      refuse(`#/layers/${index}/thicknessGPerCm2`, 'a thickness above 0', layer.thicknessGPerCm2, 0, 'g/cm²');
    }
  }
  if (total > MAX_THICKNESS_G_PER_CM2) {
    refuse('#/layers', `at most ${MAX_THICKNESS_G_PER_CM2} g/cm² in all`, total, MAX_THICKNESS_G_PER_CM2, 'g/cm²');
  }
  if (places.length > 0) {
    throw new AppError('BEAM_INVALID', `${places[0].pointer}: ${places[0].detail} (got ${places[0].got}).`, places);
  }
  return given.map((layer) => ({ material: material(layer.materialId), thickness: layer.thicknessGPerCm2 }));
}
