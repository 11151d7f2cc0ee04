/** A small assessment result for the report, from the real margin room on an artefact of our own making. */
import { aluminiumDoseDepth } from '../../../server/dose/aluminium.ts';
import { kingEventExample } from '../../../server/dose/index.ts';
import type { FluenceArtefact } from '../../../server/fluence/index.ts';
import { type AssessmentResult, assess } from '../../../server/margin/index.ts';
import { ELECTRON_EDGES_MEV, PROTON_EDGES_MEV } from '../../../server/numeric/spectrumGrid.ts';
import type { ReportInput } from '../../../server/report/index.ts';

function artefact(): FluenceArtefact {
  const phases = 4;
  const spread = { sharedSigmaDex: 0.35, sigmaDex: Float64Array.of(0.5, 0.6), side: ['anchor', 'outside'] as const };
  const electron = new Float32Array(phases * 2 * ELECTRON_EDGES_MEV.length);
  const proton = new Float32Array(phases * 2 * PROTON_EDGES_MEV.length);
  for (let row = 0; row < phases * 2; row++) {
    ELECTRON_EDGES_MEV.forEach((energy, k) => {
      electron[row * ELECTRON_EDGES_MEV.length + k] = 1e10 * (1 + row) * energy ** -3 * Math.exp(-energy / 4);
    });
    PROTON_EDGES_MEV.forEach((energy, k) => {
      proton[row * PROTON_EDGES_MEV.length + k] = 1e4 * energy ** -3;
    });
  }
  return {
    inputsSha256: 'a'.repeat(64),
    planet: 'uranus',
    beltModelId: 'uranus-belts-1',
    variants: [0, 90, 180, 270].map((offsetDeg) => ({
      fieldModelId: 'uranus-q3',
      offsetDeg,
      weight: 0.25,
      primary: true,
    })),
    nominalVariant: 1,
    groups: [{ startTdbS: 0, stopTdbS: 40_000 }],
    lEdges: Float64Array.of(4.64, 5.1, 17),
    spread: { electron: spread, proton: spread },
    energySigmaDex: {
      electron: new Float64Array(ELECTRON_EDGES_MEV.length),
      proton: new Float64Array(PROTON_EDGES_MEV.length),
    },
    electron,
    proton,
    regions: {
      electron: Array.from({ length: 2 * 90 }, (_, i) => (i < 90 ? 'anchored' : 'extrapolated')),
      proton: Array.from({ length: 2 * 120 }, () => 'extrapolated' as const),
    },
  };
}

/** @param thicker - steps of the aluminium table that every shield is thicker by */
export function smallResult(thicker = 0): AssessmentResult {
  const table = aluminiumDoseDepth();
  const at = (index: number) => table.responses[index + thicker];
  const place = (placeId: string, index: number) => ({
    placeId,
    name: `Place ${placeId}`,
    geometry: 'slab' as const,
    shieldText: `Al ${table.depthsMm[index]} mm`,
    massKg: 3 + index,
    response: at(index),
  });
  return assess({
    name: 'Small assessment',
    study: {
      studyId: 's',
      name: 'Small study',
      requiredRdm: 2,
      verdictPercentile: 95,
      phaseTreatment: 'joint',
      extrapolatedShareLimit: 0.5,
    },
    trajectories: [
      {
        trajectoryId: 't',
        name: 'Path',
        sourceSha256: 'b'.repeat(64),
        environment: {
          fieldModelId: 'uranus-q3',
          rotationModelId: 'uranus-2025',
          beltModelId: 'uranus-belts-1',
          phase: { mode: 'sweep', count: 4 },
        },
        startTdbS: 0,
        stopTdbS: 40_000,
        fluence: artefact(),
      },
    ],
    cases: [{ caseId: 'c', name: 'Case', legs: [{ trajectoryId: 't', repetitions: 1 }] }],
    options: [
      { optionId: 'thin', name: 'Thin', places: [place('deck', 8)] },
      { optionId: 'thick', name: 'Thick', places: [place('deck', 16)] },
    ],
    parts: Array.from({ length: 30 }, (_, i) => ({
      partId: `P${i}`,
      name: `Part ${i}`,
      placeId: 'deck',
      capabilityKradSi: 1 + 3 * i,
      capabilityBasis: 'test' as const,
    })),
    otherSources: [
      { name: 'Radioisotope unit', source: 'Invented for this test', phase: 'all', doseKradSi: 0.7 },
      kingEventExample(1, 'cruise'),
    ],
    sampling: { draws: 200, seed: 1 },
    doseDepthTables: [table],
    runtime: { engineVersion: 'test', nodeVersion: 'test', architecture: 'test' },
  });
}

export function smallReport(): ReportInput {
  return {
    title: 'Small report',
    documentNumber: 'SL-7',
    issue: '3',
    dateIso: '2026-01-31',
    preparer: 'A',
    checker: 'B',
    approver: 'C',
    distribution: 'Test only',
    result: smallResult(),
    trajectories: [{ trajectoryId: 't', name: 'Path', sha256: 'b'.repeat(64), summary: null }],
    environments: [
      {
        trajectoryId: 't',
        field: { id: 'uranus-q3', label: 'Q3', source: 'S' },
        rotation: {
          id: 'uranus-2025',
          label: '2025',
          source: 'S',
          periodH: 17.247864,
          periodErrorH: 1e-5,
          sigmaDegPerYear: 0.1,
        },
        belts: { id: 'uranus-belts-1', label: 'Belts', source: 'S' },
        phaseMode: 'sweep',
      },
    ],
    evidence: [{ room: 'matter', what: 'w', source: 's', ours: 'o', published: 'p', tolerance: 't' }],
    previous: null,
  };
}
