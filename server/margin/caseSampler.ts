/**
 * Draws of the dose of one case behind many shields at once.
 *
 * A draw changes the spectrum of the whole case smoothly in energy, so it is followed at every second edge of the
 * energy grids only; a shield is reduced once to its weights on those nodes, and each further dose is one short
 * product. That makes 10 000 draws behind 50 shields cost little more than 10 000 spectra.
 *
 * Δlog₁₀ j = g σ₀ + i √(σ(L)² − σ₀²) (inside the anchor; o outside) + t σ_E(E) + 0.3 s, per species; s per state of
 * the belts; the field model at equal odds; the rotation phase per flight or shared, see schedule.ts.
 */
import type { PlanetId } from '../constants/planets.ts';
import { TIME_SIGMA_DEX } from '../fluence/percentiles.ts';
import type { FluenceArtefact } from '../fluence/types.ts';
import { edgesMeV, type Species } from '../numeric/spectrumGrid.ts';
import { type BeltDraws, FACTORS_PER_DRAW, FACTORS_PER_SPECIES, type RandomNumbers } from './beltDraws.ts';
import { ENERGY_NODES, type NodeWeights, nodeEdges } from './nodeWeights.ts';
import {
  independentPhases,
  type Leg,
  type PhaseDistribution,
  phaseDistributions,
  schedulePasses,
  variantAt,
  variantNearest,
} from './schedule.ts';

const LN10 = Math.LN10;
/** Draws handled together: their spectra stay in the cache while every shield is folded. */
const BLOCK = 64;

/** A dose that is drawn: weights of one response, its statistical error, and what is added without spread. */
export interface SampledColumn {
  readonly weights: NodeWeights;
  /** Relative 1 σ error of the belt dose from the response, and its standard normal deviate for each draw. */
  readonly statisticalErrorRel: number;
  readonly errorDeviates: Float64Array | null;
  readonly constantGy: number;
}

/** What was drawn beside the doses, for telling the sources of spread apart. */
export interface DrawRecord {
  /** Index of the variant of the first flight; −1 where several flights draw their own. */
  readonly variant: Int32Array;
  readonly fieldModel: Int32Array;
  /** ln of the fluence of the drawn phases in median belts, relative to the reference spectrum. */
  readonly phaseProxy: Float64Array;
  /** Mean over the passes of the time variation, index draw · 2 + species. */
  readonly state: Float64Array;
}

interface CaseSamples {
  /** Shape (draws,) for each column, Gy, order of the draws. */
  readonly doses: readonly Float64Array[];
  readonly record: DrawRecord;
}

/** One leg, reduced to what a draw multiplies. */
interface LegTables {
  readonly planet: PlanetId;
  readonly distributions: readonly PhaseDistribution[];
  readonly independent: boolean;
  readonly groupCount: number;
  readonly species: Readonly<Record<Species, SpeciesTable>>;
}

interface SpeciesTable {
  /** L bins that hold any fluence, and per such bin σ₀, √(σ² − σ₀²) and which factor spreads it. */
  readonly binCount: number;
  readonly sharedSigma: number;
  readonly extraSigma: Float64Array;
  /** Offset of the factor that goes with `extraSigma`: 1 inside, 2 outside; 1 at the anchor, where it is nil. */
  readonly factorOffset: Uint8Array;
  readonly energySigma: Float64Array;
  /** Index ((variant · groups + group) · binCount + bin) · nodes + node, cm⁻² MeV⁻¹. */
  readonly fluence: Float32Array;
  /** Workspaces: factor of each bin, and the spectrum before its energy spread. */
  readonly binFactor: Float64Array;
  readonly sum: Float64Array;
}

export interface CaseSampler {
  /**
   * @param columns - what to draw the dose of
   * @param draws - how many of the belt draws to use, from the first
   * @param worstOffsetsDeg - per leg: fly every pass at this offset instead of a drawn one
   */
  sample(columns: readonly SampledColumn[], draws: number, worstOffsetsDeg?: readonly number[]): CaseSamples;
}

/** Prepares a case for drawing. `numbers` holds the belts of every planet of the legs. */
export function makeCaseSampler(legs: readonly Leg[], numbers: RandomNumbers): CaseSampler {
  const schedule = schedulePasses(legs);
  const tables = legs.map(makeLegTables);
  const beltsOf = tables.map(({ planet }) => {
    const draws = numbers.belts[planet];
    if (draws === undefined) throw new TypeError(`no belt draws for ${planet}`);
    return draws;
  });
  const nodes = { electron: ENERGY_NODES.electron.length, proton: ENERGY_NODES.proton.length };
  const coefficients = tables.map((table, leg) => {
    const variants = legs[leg].trajectory.fluence.variants.length;
    return {
      electron: new Float64Array(variants * table.groupCount),
      proton: new Float64Array(variants * table.groupCount),
    };
  });
  const flights = legs.flatMap(({ repetitions }, leg) => Array.from({ length: repetitions }, () => leg));
  const singleFlight = flights.length === 1;
  // One draw at a time: what it drew, and which variant each flight follows.
  const states = new Float64Array(2 * schedule.stateCount);
  const phases = new Float64Array(1 + flights.length);
  const flightVariant = new Int32Array(flights.length);

  function sample(columns: readonly SampledColumn[], draws: number, worst?: readonly number[]): CaseSamples {
    if (draws > numbers.draws) throw new TypeError(`${draws} draws asked for, ${numbers.draws} made`);
    const doses = columns.map(() => new Float64Array(draws));
    const record: DrawRecord = {
      variant: new Int32Array(draws).fill(-1),
      fieldModel: new Int32Array(draws),
      phaseProxy: new Float64Array(draws),
      state: new Float64Array(draws * 2),
    };
    const spectra = {
      electron: new Float64Array(BLOCK * nodes.electron),
      proton: new Float64Array(BLOCK * nodes.proton),
    };
    const from = {
      electron: Math.min(nodes.electron, ...columns.map(({ weights }) => weights.electron.from)),
      proton: Math.min(nodes.proton, ...columns.map(({ weights }) => weights.proton.from)),
    };
    for (let first = 0; first < draws; first += BLOCK) {
      const count = Math.min(BLOCK, draws - first);
      spectra.electron.fill(0);
      spectra.proton.fill(0);
      for (let slot = 0; slot < count; slot++) {
        const draw = first + slot;
        pickVariants(draw, record, worst);
        weighPasses(draw, record);
        for (let leg = 0; leg < tables.length; leg++) {
          const { electron, proton } = tables[leg].species;
          addSpecies(
            electron,
            coefficients[leg].electron,
            beltsOf[leg],
            draw,
            0,
            spectra.electron,
            slot,
            from.electron,
          );
          addSpecies(proton, coefficients[leg].proton, beltsOf[leg], draw, 1, spectra.proton, slot, from.proton);
        }
        if (!singleFlight) record.phaseProxy[draw] = phaseProxy(tables, schedule.events, flightVariant);
      }
      for (let c = 0; c < columns.length; c++) foldBlock(columns[c], spectra, first, count, doses[c]);
    }
    return { doses, record };
  }

  /** Field model and rotation phase of every flight of a draw. */
  function pickVariants(draw: number, record: DrawRecord, worst: readonly number[] | undefined): void {
    numbers.phases.rowInto(draw, phases);
    for (let flight = 0; flight < flights.length; flight++) {
      const leg = flights[flight];
      const table = tables[leg];
      const model = Math.floor(beltsOf[leg].fieldUniform[draw] * table.distributions.length);
      if (flight === 0) record.fieldModel[draw] = model;
      const distribution = table.distributions[model];
      flightVariant[flight] =
        worst === undefined
          ? variantAt(distribution, phases[table.independent ? 1 + flight : 0])
          : variantNearest(distribution, worst[leg]);
    }
    if (singleFlight) record.variant[draw] = flightVariant[0];
  }

  /** How often each (variant, group) is flown, times the state of the belts it meets. */
  function weighPasses(draw: number, record: DrawRecord): void {
    numbers.states.rowInto(draw, states);
    for (let leg = 0; leg < coefficients.length; leg++) {
      coefficients[leg].electron.fill(0);
      coefficients[leg].proton.fill(0);
    }
    const { events } = schedule;
    for (let i = 0; i < events.length; i++) {
      const { leg, group, flight, state } = events[i];
      const at = flightVariant[flight] * tables[leg].groupCount + group;
      const sElectron = states[2 * state];
      const sProton = states[2 * state + 1];
      coefficients[leg].electron[at] += Math.exp(LN10 * TIME_SIGMA_DEX * sElectron);
      coefficients[leg].proton[at] += Math.exp(LN10 * TIME_SIGMA_DEX * sProton);
      record.state[draw * 2] += sElectron / events.length;
      record.state[draw * 2 + 1] += sProton / events.length;
    }
  }

  return { sample };
}

/** Adds coefficient × factors × fluence of one leg and species to the spectrum in `slot`, from the first node any shield needs. */
function addSpecies(
  table: SpeciesTable,
  coefficients: Float64Array,
  belts: BeltDraws,
  draw: number,
  species: number,
  spectra: Float64Array,
  slot: number,
  from: number,
): void {
  const { binCount, fluence, binFactor, energySigma } = table;
  const nodes = energySigma.length;
  const factorBase = draw * FACTORS_PER_DRAW + species * FACTORS_PER_SPECIES;
  const { factors } = belts;
  const shared = factors[factorBase] * table.sharedSigma;
  for (let bin = 0; bin < binCount; bin++) {
    binFactor[bin] = Math.exp(LN10 * (shared + factors[factorBase + table.factorOffset[bin]] * table.extraSigma[bin]));
  }
  const base = slot * nodes;
  const t = LN10 * factors[factorBase + 3];
  const { sum } = table;
  sum.fill(0);
  for (let at = 0; at < coefficients.length; at++) {
    const coefficient = coefficients[at];
    if (coefficient === 0) continue;
    let row = at * binCount * nodes;
    let bin = 0;
    // Four rows at a time: the sum is then read and written a quarter as often.
    for (; bin + 3 < binCount; bin += 4, row += 4 * nodes) {
      const f0 = coefficient * binFactor[bin];
      const f1 = coefficient * binFactor[bin + 1];
      const f2 = coefficient * binFactor[bin + 2];
      const f3 = coefficient * binFactor[bin + 3];
      for (let node = from; node < nodes; node++) {
        const here = row + node;
        sum[node] +=
          f0 * fluence[here] +
          f1 * fluence[here + nodes] +
          (f2 * fluence[here + 2 * nodes] + f3 * fluence[here + 3 * nodes]);
      }
    }
    for (; bin < binCount; bin++, row += nodes) {
      const factor = coefficient * binFactor[bin];
      for (let node = from; node < nodes; node++) sum[node] += factor * fluence[row + node];
    }
  }
  for (let node = from; node < nodes; node++) {
    const spread = energySigma[node];
    spectra[base + node] += spread === 0 ? sum[node] : sum[node] * Math.exp(t * spread);
  }
}

function foldBlock(
  column: SampledColumn,
  spectra: Record<Species, Float64Array>,
  first: number,
  count: number,
  out: Float64Array,
): void {
  const { electron, proton } = column.weights;
  const { statisticalErrorRel, errorDeviates, constantGy } = column;
  for (let k = 0; k < count; k++) {
    let belts = weightedSum(electron, spectra.electron, k) + weightedSum(proton, spectra.proton, k);
    if (errorDeviates !== null) belts *= 1 + statisticalErrorRel * errorDeviates[first + k];
    // Interpolation may leave a rounding below zero where a spectrum is cut off; no dose is negative.
    out[first + k] = constantGy + Math.max(0, belts);
  }
}

function weightedSum(weights: NodeWeights['electron'], spectra: Float64Array, slot: number): number {
  const { values, from } = weights;
  const base = slot * values.length;
  const n = values.length;
  let a = 0;
  let b = 0;
  let c = 0;
  let d = 0;
  let node = from;
  for (; node + 3 < n; node += 4) {
    a += values[node] * spectra[base + node];
    b += values[node + 1] * spectra[base + node + 1];
    c += values[node + 2] * spectra[base + node + 2];
    d += values[node + 3] * spectra[base + node + 3];
  }
  for (; node < n; node++) a += values[node] * spectra[base + node];
  return a + b + (c + d);
}

/** ln of the median-belt electron fluence near 1 MeV of the drawn phases: how good or bad the phases of a draw are. */
function phaseProxy(
  tables: readonly LegTables[],
  events: ReturnType<typeof schedulePasses>['events'],
  flightVariant: Int32Array,
): number {
  let sum = 0;
  for (const { leg, group, flight } of events) {
    const { binCount, fluence, energySigma } = tables[leg].species.electron;
    const nodes = energySigma.length;
    let at = (flightVariant[flight] * tables[leg].groupCount + group) * binCount * nodes + PROXY_NODE;
    for (let bin = 0; bin < binCount; bin++, at += nodes) sum += fluence[at];
  }
  return sum > 0 ? Math.log(sum) : 0;
}

const PROXY_NODE = ENERGY_NODES.electron.findIndex((edge) => edgesMeV('electron')[edge] >= 1);

/** Tables depend on the artefact alone and several cases fly the same one; their workspaces are used one draw at a time. */
const tablesOf = new WeakMap<FluenceArtefact, LegTables['species']>();

function makeLegTables({ trajectory }: Leg): LegTables {
  const { fluence } = trajectory;
  let species = tablesOf.get(fluence);
  if (species === undefined) {
    species = { electron: makeSpeciesTable(fluence, 'electron'), proton: makeSpeciesTable(fluence, 'proton') };
    tablesOf.set(fluence, species);
  }
  return {
    planet: fluence.planet,
    distributions: phaseDistributions(fluence),
    independent: independentPhases(trajectory),
    groupCount: fluence.groups.length,
    species,
  };
}

function makeSpeciesTable(artefact: FluenceArtefact, species: Species): SpeciesTable {
  const data = artefact[species];
  const edgeCount = edgesMeV(species).length;
  const picked = nodeEdges(species);
  const nL = artefact.lEdges.length - 1;
  const rows = artefact.variants.length * artefact.groups.length;
  const used: number[] = [];
  for (let l = 0; l < nL; l++) {
    let any = false;
    for (let row = 0; row < rows && !any; row++) {
      const base = (row * nL + l) * edgeCount;
      for (let edge = 0; edge < edgeCount && !any; edge++) any = data[base + edge] > 0;
    }
    if (any) used.push(l);
  }
  const binCount = used.length;
  const fluence = new Float32Array(rows * binCount * picked.length);
  let at = 0;
  for (let row = 0; row < rows; row++) {
    for (const l of used) {
      const base = (row * nL + l) * edgeCount;
      for (const edge of picked) fluence[at++] = data[base + edge];
    }
  }
  const { sharedSigmaDex, sigmaDex, side } = artefact.spread[species];
  return {
    binCount,
    sharedSigma: sharedSigmaDex,
    extraSigma: Float64Array.from(used, (l) => Math.sqrt(Math.max(0, sigmaDex[l] ** 2 - sharedSigmaDex ** 2))),
    factorOffset: Uint8Array.from(used, (l) => (side[l] === 'outside' ? 2 : 1)),
    energySigma: Float64Array.from(picked, (edge) => artefact.energySigmaDex[species][edge]),
    fluence,
    binFactor: new Float64Array(binCount),
    sum: new Float64Array(picked.length),
  };
}
