import {
  ELECTRON_REST_MEV,
  electronCollisionStopping,
  electronRadiativeStopping,
  type Material,
  mollerLoss,
  photonCrossSections,
  TWO_PI_NA_RE2_MC2,
  zOverA,
} from '../matter/index.ts';
import { bremsstrahlungShape } from './bremsstrahlung.ts';
import { elasticRow } from './elasticTable.ts';
import {
  BREMS_QUANTILES,
  ELASTIC_QUANTILES,
  ELECTRON_COLUMNS,
  PHOTON_COLUMNS,
  PHOTON_COMPTON,
  PHOTON_PAIR,
  RANGE,
  RATE_BREMS,
  RATE_ELASTIC,
  RATE_HARD,
  RATE_MOLLER,
  SOFT_1,
  SOFT_2,
  STOPPING,
  STRAGGLING,
} from './layout.ts';
import { ROW_COUNT, rowEnergyMeV } from './rows.ts';

/** Everything the histories look up about one material, for one cut between soft and hard losses. */
export interface TransportTables {
  readonly cutMeV: number;
  /** Shape (ROW_COUNT, ELECTRON_COLUMNS), see layout.ts; lengths in g/cm². */
  readonly electron: Float64Array;
  /** Shape (ROW_COUNT, PHOTON_COLUMNS), cm²/g. */
  readonly photon: Float64Array;
  /** Shape (ROW_COUNT,), screening the elastic quantiles refer to. */
  readonly screening: Float64Array;
  /** Shape (ROW_COUNT, ELASTIC_QUANTILES), of 1/(μ + screening) over hard elastic collisions. */
  readonly elasticQuantiles: Float64Array;
  /** Shape (ROW_COUNT, BREMS_QUANTILES), of ln(k / MeV) over photons above the cut. */
  readonly bremsQuantiles: Float64Array;
}

/** Largest share of its energy that an electron loses softly in one step. */
export const STEP_LOSS_SHARE = 0.08;
const SHAPE_STEPS = 400;
/** Lowest photon of the spectral integrals, as a share of the electron energy. */
const SHAPE_START = 1e-4;

const cache = new WeakMap<Material, Map<number, TransportTables>>();

/** Tables of a material, made once per cut. */
export function transportTables(of: Material, cutMeV: number): TransportTables {
  let byCut = cache.get(of);
  if (byCut === undefined) {
    byCut = new Map();
    cache.set(of, byCut);
  }
  let tables = byCut.get(cutMeV);
  if (tables === undefined) {
    tables = buildTables(of, cutMeV);
    byCut.set(cutMeV, tables);
  }
  return tables;
}

/** Rates of large-angle scattering and of bremsstrahlung above the cut near an energy, per g/cm². */
export function hardRates(of: Material, energyMeV: number, cutMeV: number): { elastic: number; brems: number } {
  const { electron } = transportTables(of, cutMeV);
  let row = 0;
  while (row < ROW_COUNT - 1 && rowEnergyMeV(row + 1) <= energyMeV) row += 1;
  const at = row * ELECTRON_COLUMNS;
  return { elastic: electron[at + RATE_ELASTIC], brems: electron[at + RATE_BREMS] };
}

function buildTables(of: Material, cutMeV: number): TransportTables {
  const electron = new Float64Array(ROW_COUNT * ELECTRON_COLUMNS);
  const photon = new Float64Array(ROW_COUNT * PHOTON_COLUMNS);
  const screening = new Float64Array(ROW_COUNT);
  const elasticQuantiles = new Float64Array(ROW_COUNT * ELASTIC_QUANTILES);
  const bremsQuantiles = new Float64Array(ROW_COUNT * BREMS_QUANTILES);
  let range = 0;
  let lastInverse = 0;
  for (let row = 0; row < ROW_COUNT; row++) {
    const energy = rowEnergyMeV(row);
    const at = row * ELECTRON_COLUMNS;
    const elastic = elasticRow(
      of,
      energy,
      elasticQuantiles.subarray(row * ELASTIC_QUANTILES, (row + 1) * ELASTIC_QUANTILES),
    );
    screening[row] = elastic.screening;
    const collision = Math.max(electronCollisionStopping(of, Math.max(energy, LOWEST_STOPPING_MEV)), 0);
    const radiative = electronRadiativeStopping(of, energy);
    const brems = bremsRow(
      of,
      energy,
      cutMeV,
      radiative,
      bremsQuantiles.subarray(row * BREMS_QUANTILES, (row + 1) * BREMS_QUANTILES),
    );
    const hardLoss = cutMeV < energy / 2 ? mollerLoss(of, energy, cutMeV) : 0;
    const strength = mollerStrength(of, energy);
    const softTop = Math.min(cutMeV, energy / 2);
    // Deflection by soft collisions with electrons: momentum transfers from I up to the cut, 1 − cos = W m / T(T + 2m).
    const excitation = of.meanExcitationEv * 1e-6;
    const electronSoft1 =
      softTop > excitation
        ? (strength * Math.log(softTop / excitation) * ELECTRON_REST_MEV) / (energy * (energy + 2 * ELECTRON_REST_MEV))
        : 0;
    electron[at + STOPPING] = collision - hardLoss + brems.softLoss;
    electron[at + STRAGGLING] = strength * softTop * (1 - (betaSquared(energy) * softTop) / (2 * energy));
    electron[at + RATE_ELASTIC] = elastic.hard;
    electron[at + RATE_MOLLER] = cutMeV < energy / 2 ? mollerRate(of, energy, cutMeV) : 0;
    electron[at + RATE_BREMS] = brems.rate;
    electron[at + RATE_HARD] = electron[at + RATE_ELASTIC] + electron[at + RATE_MOLLER] + brems.rate;
    electron[at + SOFT_1] = elastic.soft1 + electronSoft1;
    electron[at + SOFT_2] = elastic.soft2 + 3 * electronSoft1;
    const inverse = 1 / (collision + radiative);
    range =
      row === 0 ? 0.56 * energy * inverse : range + 0.5 * (inverse + lastInverse) * (energy - rowEnergyMeV(row - 1));
    lastInverse = inverse;
    electron[at + RANGE] = range;
    const cross = photonCrossSections(of, Math.min(Math.max(energy, 0.001), 100));
    photon[row * PHOTON_COLUMNS] = cross.photo + cross.compton + cross.pair;
    photon[row * PHOTON_COLUMNS + PHOTON_COMPTON] = cross.compton;
    photon[row * PHOTON_COLUMNS + PHOTON_PAIR] = cross.pair;
  }
  return { cutMeV, electron, photon, screening, elasticQuantiles, bremsQuantiles };
}

/** Below this the logarithm of the stopping formula turns over in heavy elements; the value there is held. */
const LOWEST_STOPPING_MEV = 0.002;

function betaSquared(energyMeV: number): number {
  const gamma = 1 + energyMeV / ELECTRON_REST_MEV;
  return 1 - 1 / (gamma * gamma);
}

/** 2π N_A r_e² m c² Z/A / β², MeV cm²/g. */
function mollerStrength(of: Material, energyMeV: number): number {
  return (TWO_PI_NA_RE2_MC2 * zOverA(of)) / betaSquared(energyMeV);
}

/** Møller collisions with transfers above the cut, per g/cm². */
function mollerRate(of: Material, energyMeV: number, cutMeV: number): number {
  const gamma = 1 + energyMeV / ELECTRON_REST_MEV;
  const e = cutMeV / energyMeV;
  const a = ((gamma - 1) / gamma) ** 2;
  const b = (2 * gamma - 1) / (gamma * gamma);
  const integral = 1 / e - 1 / (1 - e) + a * (0.5 - e) + b * Math.log(e / (1 - e));
  return (mollerStrength(of, energyMeV) / energyMeV) * integral;
}

const shape = new Float64Array(SHAPE_STEPS + 1);

/** Photons above the cut per g/cm², energy lost to those below, and quantiles of ln k; normalised to the stopping power. */
function bremsRow(
  of: Material,
  energyMeV: number,
  cutMeV: number,
  radiative: number,
  quantiles: Float64Array,
): { rate: number; softLoss: number } {
  const low = Math.log(SHAPE_START * energyMeV);
  const h = -Math.log(SHAPE_START) / SHAPE_STEPS;
  for (let j = 0; j <= SHAPE_STEPS; j++) {
    const k = Math.min(Math.exp(low + j * h), energyMeV * (1 - 1e-7));
    let sum = 0;
    for (const { z, atomicMassGPerMol, massFraction } of of.constituents) {
      sum += ((massFraction * z * z) / atomicMassGPerMol) * bremsstrahlungShape(z, energyMeV, k);
    }
    shape[j] = sum;
  }
  let total = shape[0] * SHAPE_START * energyMeV;
  let soft = Math.min(total, shape[0] * cutMeV);
  let number = 0;
  const logCut = Math.log(cutMeV);
  for (let j = 0; j < SHAPE_STEPS; j++) {
    const from = low + j * h;
    const kMiddle = Math.exp(from + h / 2);
    const mean = 0.5 * (shape[j] + shape[j + 1]);
    const above = Math.min(1, Math.max(0, (from + h - logCut) / h));
    total += mean * kMiddle * h;
    soft += mean * kMiddle * h * (1 - above);
    number += mean * h * above;
  }
  const scale = radiative / total;
  if (cutMeV >= energyMeV || !(number > 0)) {
    quantiles.fill(Math.log(energyMeV));
    return { rate: 0, softLoss: radiative };
  }
  let passed = 0;
  // The first panel that reaches above the cut.
  let j = 0;
  while (j < SHAPE_STEPS - 1 && low + (j + 1) * h <= logCut) j += 1;
  for (let q = 0; q < BREMS_QUANTILES; q++) {
    const target = (number * q) / (BREMS_QUANTILES - 1);
    for (;;) {
      const from = low + j * h;
      const above = Math.min(1, Math.max(0, (from + h - logCut) / h));
      const here = 0.5 * (shape[j] + shape[j + 1]) * h * above;
      if (passed + here < target && j < SHAPE_STEPS - 1) {
        passed += here;
        j += 1;
        continue;
      }
      const within = here > 0 ? Math.min(1, (target - passed) / here) : 0;
      quantiles[q] = from + h - above * h + within * above * h;
      break;
    }
  }
  return { rate: number * scale, softLoss: soft * scale };
}
