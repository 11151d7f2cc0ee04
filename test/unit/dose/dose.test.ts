import { describe, expect, it } from 'vitest';
import {
  binHistory,
  checkOtherSource,
  depthsWithin,
  doseDepthCurve,
  ELEMENTARY_CHARGE_PC,
  foldDamage,
  foldDose,
  foldTransmittedElectrons,
  kingEventExample,
  kingEventIntegralPerCm2,
  otherSpectra,
  peakDoseRate,
  readDoseDepth,
  spectraByEvidence,
  spectraFromEdges,
  transmittedPeak,
} from '../../../server/dose/index.ts';
import { AppError } from '../../../server/errors.ts';
import { EVIDENCE_REGIONS } from '../../../server/flux/types.ts';
import { ELECTRON_EDGES_MEV, PROTON_EDGES_MEV } from '../../../server/numeric/spectrumGrid.ts';
import { toyArtefact, toyResponse } from '../margin/toy.ts';

const EPS = 1e-12;

function powerLawSpectra(index: number, scale = 1): ReturnType<typeof spectraFromEdges> {
  return spectraFromEdges(
    ELECTRON_EDGES_MEV.map((energy) => scale * energy ** index),
    new Float64Array(PROTON_EDGES_MEV.length),
  );
}

describe('foldDose', () => {
  it('integrates a power law behind a flat response exactly', () => {
    // Source: ∫ E⁻³ dE from 0.02 to 100 MeV = (0.02⁻² − 100⁻²) / 2.
    const dose = foldDose(powerLawSpectra(-3), toyResponse({ electron: () => 2e-10, bremsstrahlung: () => 1e-10 }));
    const fluence = (0.02 ** -2 - 100 ** -2) / 2;
    expect(Math.abs(dose.electronGy / (2e-10 * fluence) - 1)).toBeLessThan(EPS);
    expect(Math.abs(dose.bremsstrahlungGy / (1e-10 * fluence) - 1)).toBeLessThan(EPS);
    expect(dose.protonGy).toBe(0);
    expect(dose.totalGy).toBe(dose.electronGy + dose.bremsstrahlungGy);
  });

  it('adds the errors of bins in quadrature', () => {
    const spectra = powerLawSpectra(-3);
    const dose = foldDose(spectra, toyResponse({ electron: () => 2e-10, bremsstrahlung: () => 1e-10, sigmaRel: 0.1 }));
    const expected = Math.sqrt(spectra.electronPerCm2.reduce((sum, n) => sum + (n * 2e-11) ** 2 + (n * 1e-11) ** 2, 0));
    expect(Math.abs(dose.sigmaGy / expected - 1)).toBeLessThan(EPS);
    expect(dose.sigmaGy).toBeLessThan(0.1 * dose.totalGy);
  });

  it('is linear in the fluence and refuses spectra of another grid', () => {
    const response = toyResponse({ electron: (energy) => 1e-10 * energy });
    const once = foldDose(powerLawSpectra(-2), response).totalGy;
    expect(Math.abs(foldDose(powerLawSpectra(-2, 7), response).totalGy / (7 * once) - 1)).toBeLessThan(EPS);
    expect(() =>
      foldDose({ electronPerCm2: new Float64Array(3), protonPerCm2: new Float64Array(120) }, response),
    ).toThrow(TypeError);
  });
});

describe('spectraByEvidence', () => {
  it('splits the fluence by region without losing any', () => {
    const artefact = toyArtefact({
      sides: ['inside', 'anchor'],
      fluence: ({ bin, energyMeV }) => (bin + 1) * energyMeV ** -2,
      region: (_, bin, energy) => (bin === 0 ? 'extrapolated' : energy < 1 ? 'anchored' : 'sampled'),
    });
    const parts = spectraByEvidence(artefact, [{ variant: 0, weight: 1 }]);
    const sum = EVIDENCE_REGIONS.reduce(
      (total, region) => total + parts[region].electronPerCm2.reduce((a, b) => a + b, 0),
      0,
    );
    // Source: ∫ 3 E⁻² dE = 3 (1/0.02 − 1/100); artefacts are single precision.
    const SINGLE_PRECISION_REL = 1e-6;
    expect(Math.abs(sum / (3 * (50 - 0.01)) - 1)).toBeLessThan(SINGLE_PRECISION_REL);
    const extrapolated = parts.extrapolated.electronPerCm2.reduce((a, b) => a + b, 0);
    expect(Math.abs(extrapolated / sum - 1 / 3)).toBeLessThan(SINGLE_PRECISION_REL);
    expect(parts.sampledQualitative.electronPerCm2.every((value) => value === 0)).toBe(true);
  });
});

describe('displacement damage', () => {
  it('states damage as 1 MeV neutrons in silicon', () => {
    // Source: ASTM E722, 95 MeV mb; times N_A / 28.0855 = 2.037e-3 MeV cm²/g.
    const spectra = powerLawSpectra(-3);
    const damage = foldDamage(spectra, toyResponse({}));
    const fluence = (0.02 ** -2 - 100 ** -2) / 2;
    expect(Math.abs(damage.electronMeVPerG / (3e-5 * fluence) - 1)).toBeLessThan(EPS);
    expect(damage.totalMeVPerG).toBe(damage.electronMeVPerG + damage.protonMeVPerG);
    expect(Math.abs((damage.neutronEquivalentPerCm2 * 2.037e-3) / damage.totalMeVPerG - 1)).toBeLessThan(1e-4);
  });
});

describe('dose against depth', () => {
  it('reads a table log-log and refuses to leave it', () => {
    const depths = [1, 2, 4, 8];
    const doses = depths.map((depth) => 100 * depth ** -2);
    expect(readDoseDepth(depths, doses, 3)).toBeCloseTo(100 / 9, 10);
    expect(readDoseDepth(depths, doses, 1)).toBe(100);
    expect(readDoseDepth(depths, doses, 8)).toBeCloseTo(100 / 64, 12);
    for (const outside of [0.99, 8.01, Number.NaN]) {
      expect(() => readDoseDepth(depths, doses, outside)).toThrow(AppError);
    }
  });

  it('is one fold a depth', () => {
    const responses = [1, 2].map((k) =>
      toyResponse({ name: `r${k}`, electron: () => 1e-10 / k, bremsstrahlung: () => 1e-12, sigmaRel: 0.01 }),
    );
    const table = {
      geometry: 'slab' as const,
      materialId: 'Al',
      densityGPerCm3: 2.7,
      targetText: 'Toy target',
      depthsMm: [1, 2],
      responses,
    };
    const spectra = powerLawSpectra(-2);
    const curve = doseDepthCurve(spectra, table);
    responses.forEach((response, i) => {
      expect(curve.totalGy[i]).toBe(foldDose(spectra, response).totalGy);
      expect(curve.sigmaGy[i]).toBe(foldDose(spectra, response).sigmaGy);
    });
    expect(curve.electronGy[0] / curve.electronGy[1]).toBeCloseTo(2, 12);
    expect(depthsWithin(table, 1.5, 2)).toEqual({ ...table, depthsMm: [2], responses: [responses[1]] });
  });
});

describe('flux history behind a shield', () => {
  /** Triangle of flux over `spanS`, peak in the middle, spectrum 1/E² up to a scale. */
  function triangle(peakFlux: number, spanS: number, samples = 201): ReturnType<typeof binHistory> {
    const epochTdbS = Float64Array.from({ length: samples }, (_, i) => (spanS * i) / (samples - 1));
    const electron = new Float32Array(samples * 91);
    for (let i = 0; i < samples; i++) {
      const share = 1 - Math.abs((2 * i) / (samples - 1) - 1);
      for (let edge = 0; edge < 91; edge++)
        electron[i * 91 + edge] = (peakFlux * share) / ELECTRON_EDGES_MEV[edge] ** 2;
    }
    return binHistory({ epochTdbS, electron, proton: new Float32Array(samples * 121) });
  }
  const all = 1 / 0.02 - 1 / 100;
  const SINGLE_PRECISION_REL = 1e-6;

  it('finds the peak dose rate and when', () => {
    const peak = peakDoseRate(triangle(1e3, 7200), toyResponse({ electron: () => 1e-10 }));
    expect(Math.abs(peak.doseRateGyPerS / (1e-7 * all) - 1)).toBeLessThan(SINGLE_PRECISION_REL);
    expect(peak.epochTdbS).toBe(3600);
  });

  it('turns transmitted electrons into current', () => {
    // Source: 0.1 pA/cm² is 0.1e-12 / 1.602176634e-19 = 6.2415e5 electrons per cm² and second, 2.247e10 in 10 h.
    expect(0.1 / ELEMENTARY_CHARGE_PC).toBeCloseTo(624150.907, 2);
    const flux = 624150.907 / all;
    const peak = transmittedPeak(triangle(flux, 7200), toyResponse({ transmitted: () => 1 }), 36_000);
    expect(peak.currentPaPerCm2).toBeCloseTo(0.1, 6);
    // Source: area of the triangle; the whole passage fits into 10 h.
    expect(Math.abs(peak.windowFluencePerCm2 / (0.5 * 7200 * 624150.907) - 1)).toBeLessThan(SINGLE_PRECISION_REL);
  });

  it('takes the fullest window of a passage that outlasts it', () => {
    // Source: triangle of height h over T; a window w centred on the peak holds h w (1 − w / (2 T)).
    const spanS = 100_000;
    const windowS = 36_000;
    const flux = 1e4;
    const peak = transmittedPeak(triangle(flux / all, spanS, 2001), toyResponse({ transmitted: () => 1 }), windowS);
    const expected = flux * windowS * (1 - windowS / (2 * spanS));
    /** Windows start at samples 50 s apart: second order in the spacing. */
    const WINDOW_TOLERANCE_REL = 1e-5;
    expect(Math.abs(peak.windowFluencePerCm2 / expected - 1)).toBeLessThan(WINDOW_TOLERANCE_REL);
  });

  it('folds a fluence with the same transmission', () => {
    const spectra = powerLawSpectra(-2);
    expect(foldTransmittedElectrons(spectra, toyResponse({ transmitted: () => 0.25 }))).toBeCloseTo(0.25 * all, 9);
  });
});

describe('other sources', () => {
  const base = { name: 'Cruise', source: 'Project note 12', phase: 'cruise' };

  it('accepts each of the three kinds', () => {
    checkOtherSource({ ...base, doseKradSi: 0.7 }, '#/otherSources/0');
    checkOtherSource({ ...base, doseDepth: { depthsMm: [1, 2], doseKradSi: [3, 1] } }, '#/otherSources/0');
    checkOtherSource(kingEventExample(1, 'cruise'), '#/otherSources/0');
    expect(kingEventExample(1, 'cruise').fluence?.example).toBe(true);
  });

  it.each([
    ['no kind', { ...base }, '#/otherSources/0'],
    ['two kinds', { ...base, doseKradSi: 1, doseDepth: { depthsMm: [1, 2], doseKradSi: [2, 1] } }, '#/otherSources/0'],
    ['no citation', { ...base, source: ' ', doseKradSi: 1 }, '#/otherSources/0/source'],
    ['negative dose', { ...base, doseKradSi: -1 }, '#/otherSources/0/doseKradSi'],
    ['NaN dose', { ...base, doseKradSi: Number.NaN }, '#/otherSources/0/doseKradSi'],
    [
      'falling depths',
      { ...base, doseDepth: { depthsMm: [2, 1], doseKradSi: [2, 1] } },
      '#/otherSources/0/doseDepth/depthsMm/1',
    ],
    [
      'zero in a dose table',
      { ...base, doseDepth: { depthsMm: [1, 2], doseKradSi: [2, 0] } },
      '#/otherSources/0/doseDepth/doseKradSi/1',
    ],
    ['one point', { ...base, doseDepth: { depthsMm: [1], doseKradSi: [2] } }, '#/otherSources/0/doseDepth'],
    [
      'rising integral',
      { ...base, fluence: { species: 'proton' as const, energiesMeV: [1, 2, 3], integralPerCm2: [3, 1, 2] } },
      '#/otherSources/0/fluence/integralPerCm2/2',
    ],
    [
      'differential and integral',
      {
        ...base,
        fluence: {
          species: 'proton' as const,
          energiesMeV: [1, 2],
          integralPerCm2: [2, 1],
          differentialPerCm2MeV: [1, 1],
        },
      },
      '#/otherSources/0/fluence',
    ],
  ])('refuses %s and names the place', (_, input, pointer) => {
    let caught: unknown;
    try {
      checkOtherSource(input, '#/otherSources/0');
    } catch (error) {
      caught = error;
    }
    expect(caught).toBeInstanceOf(AppError);
    expect((caught as AppError).code).toBe('OTHER_SOURCE_INVALID');
    expect((caught as AppError).places.map((place) => place.pointer)).toContain(pointer);
  });

  it('carries a differential spectrum onto the grid', () => {
    const energiesMeV = [1, 3, 10, 100];
    const { spectra, notices } = otherSpectra({
      species: 'proton',
      energiesMeV,
      differentialPerCm2MeV: energiesMeV.map((energy) => 5e6 * energy ** -2),
    });
    // Source: ∫ 5e6 E⁻² dE from 1 to 100.
    expect(spectra.protonPerCm2.reduce((a, b) => a + b, 0) / (5e6 * (1 - 0.01))).toBeCloseTo(1, 12);
    expect(spectra.electronPerCm2.every((value) => value === 0)).toBe(true);
    expect(notices).toEqual([]);
  });

  it('takes bins from differences of an integral spectrum and says what has no energy', () => {
    const { spectra, notices } = otherSpectra({
      species: 'electron',
      energiesMeV: [0.1, 1, 10],
      integralPerCm2: [1e9, 1e7, 1e5],
    });
    expect(spectra.electronPerCm2.reduce((a, b) => a + b, 0) / (1e9 - 1e5)).toBeCloseTo(1, 12);
    expect(notices).toHaveLength(1);
    expect(notices[0]).toContain('1.00e+5');
  });

  it('gives the event of the form of King (1974)', () => {
    // Source: the formula itself, F(>30 MeV) = 7.9e9 and an e-fold in 26.5 MeV (db/reference/king-1974/SOURCE.md).
    expect(kingEventIntegralPerCm2(30)).toBe(7.9e9);
    expect(kingEventIntegralPerCm2(56.5) * Math.E).toBeCloseTo(7.9e9, -1);
    const { fluence } = kingEventExample(2, 'cruise');
    const total = otherSpectra(fluence!).spectra.protonPerCm2.reduce((a, b) => a + b, 0);
    const expected = 2 * (kingEventIntegralPerCm2(10) - kingEventIntegralPerCm2(200));
    /** Power laws between 60 nodes of an exponential: below 0.1 %. */
    expect(Math.abs(total / expected - 1)).toBeLessThan(1e-3);
    expect(() => kingEventExample(0, 'cruise')).toThrow(TypeError);
  });
});
