/** The rows of the evidence annex: every row is evaluated from the rooms, beside what others published. */
import { readFileSync } from 'node:fs';
import { bytesOf } from '../../server/ephemeris/index.ts';
import { evaluatePoint, fieldModel, makeLabel, tracedLabeller } from '../../server/field/index.ts';
import { beltModel } from '../../server/flux/index.ts';
import { bodyAxesInto, phaseSigmaDeg, ROTATION_MODELS, rotateInto } from '../../server/frames/rotation.ts';
import { lotCapability, toleranceFactor } from '../../server/margin/index.ts';
import {
  electronCollisionStopping,
  electronCsdaRange,
  electronRadiativeStopping,
  material,
  photonAttenuation,
  protonStopping,
} from '../../server/matter/index.ts';
import type { EvidenceRow } from '../../server/report/types.ts';
import { pathsIn } from '../../server/shielding/shieldPlan.ts';
import { parseEpoch } from '../../server/time/index.ts';
import { readTrajectory } from '../../server/trajectory/index.ts';
import { runBeam } from '../../server/transport/beam.ts';

const GOLDEN = new URL('../../fixtures/golden/', import.meta.url);

function row(
  room: string,
  what: string,
  ours: string,
  published: string,
  tolerance: string,
  source: string,
): EvidenceRow {
  return { room, what, source, ours, published, tolerance };
}

export function evidenceRows(): EvidenceRow[] {
  return [
    ...encounterRows(),
    ...fieldRows(),
    ...beltRows(),
    ...matterRows(),
    ...transportRows(),
    ...shieldRows(),
    ...marginRows(),
  ];
}

function encounterRows(): EvidenceRow[] {
  const { path, summary } = readTrajectory(bytesOf(readFileSync(new URL('encounters/uranus-1986.oem', GOLDEN))));
  const [approach] = summary.closestApproaches;
  const model = fieldModel('uranus-q3');
  const labeller = tracedLabeller(model);
  const label = makeLabel();
  const state = new Float64Array(6);
  const axes = new Float64Array(9);
  const body = new Float64Array(3);
  let largest = 0;
  let leastL = Number.POSITIVE_INFINITY;
  for (let t = parseEpoch('1986-01-24T17:00:00', 'UTC'); t < parseEpoch('1986-01-24T19:00:00', 'UTC'); t += 20) {
    path.stateInto(t, state);
    bodyAxesInto(ROTATION_MODELS['uranus-1986'], t, 0, axes);
    rotateInto(axes, ...([0, 1, 2].map((i) => state[i] / model.referenceRadiusKm) as [number, number, number]), body);
    labeller.labelInto(body[0], body[1], body[2], label);
    largest = Math.max(largest, label.bNt);
    leastL = Math.min(leastL, label.lShell);
  }
  return [
    row(
      'trajectory',
      'Closest approach of 1986 at Uranus, radius',
      `${approach.radiusKm.toFixed(1)} km`,
      '107 153.0 km',
      '30 m',
      'Navigation solution of the encounter, NAIF kernel vgr2.ura182',
    ),
    row(
      'field',
      'Largest field on the encounter of 1986, Q3',
      `${largest.toFixed(1)} nT`,
      '413 nT',
      '1 %',
      'Ness et al. (1986), Science 233, 85',
    ),
    row(
      'field',
      'Least L on the encounter of 1986, Q3',
      leastL.toFixed(2),
      '4.67',
      '1.5 %',
      'Cooper & Stone (1991), J. Geophys. Res. 96, 7803',
    ),
  ];
}

function fieldRows(): EvidenceRow[] {
  const q3 = fieldModel('uranus-q3');
  const tilt = (Math.acos(q3.dipoleAxis[2]) * 180) / Math.PI;
  const o8 = fieldModel('neptune-o8');
  const o8Tilt = (Math.acos(o8.dipoleAxis[2]) * 180) / Math.PI;
  const check = evaluatePoint(q3, [5, 0, 0]);
  const sigma = phaseSigmaDeg(ROTATION_MODELS['uranus-2025'], parseEpoch('2045-01-01T00:00:00', 'UTC'));
  return [
    row(
      'field',
      'Dipole tilt of Uranus, Q3',
      `${tilt.toFixed(1)}°`,
      '58.6°',
      'printed digit',
      'Connerney, Acuna & Ness (1987)',
    ),
    row(
      'field',
      'Dipole tilt of Neptune, O8',
      `${o8Tilt.toFixed(1)}°`,
      '46.9°',
      'printed digit',
      'Connerney, Acuna & Ness (1991)',
    ),
    row(
      'field',
      'L at 5 radii, equator, longitude 0, Q3',
      check.lShell!.toFixed(5),
      '7.67355',
      '1e-6',
      'Independent integration, fixtures/golden/l-shell',
    ),
    row(
      'frames',
      'Phase error of Uranus in 2045',
      `${sigma.toFixed(1)}°`,
      '6.3°',
      'printed digit',
      'Period error of Lamy et al. (2025), Nature Astronomy',
    ),
  ];
}

function beltRows(): EvidenceRow[] {
  const belts = beltModel('uranus-belts-1');
  const ratio = belts.directional('electron', 2.5, 8, 1) / belts.directional('electron', 0.7, 8, 1);
  const index = -Math.log(ratio) / Math.log(2.5 / 0.7);
  return [
    row(
      'flux',
      'Electron index at L 8, 0.7 to 2.5 MeV',
      index.toFixed(2),
      '5 to 7',
      'range',
      'Selesnick & Stone (1991), J. Geophys. Res. 96, 5651 (from memory)',
    ),
  ];
}

function matterRows(): EvidenceRow[] {
  const nist = 'NIST SRD 124';
  const al = material('Al');
  const ta = material('Ta');
  return [
    row(
      'matter',
      'Collision stopping of 1 MeV electrons in Al',
      `${electronCollisionStopping(al, 1).toFixed(3)} MeV cm²/g`,
      '1.465',
      '0.5 %',
      nist,
    ),
    row(
      'matter',
      'Radiative stopping of 10 MeV electrons in Ta',
      `${electronRadiativeStopping(ta, 10).toFixed(3)} MeV cm²/g`,
      '1.122',
      '1.5 %',
      nist,
    ),
    row(
      'matter',
      'CSDA range of 1 MeV electrons in Al',
      `${electronCsdaRange(al, 1).toFixed(4)} g/cm²`,
      '0.5546',
      '1 %',
      nist,
    ),
    row(
      'matter',
      'Stopping of 10 MeV protons in Si',
      `${protonStopping(material('Si'), 10).toFixed(2)} MeV cm²/g`,
      '34.58',
      '0.5 %',
      nist,
    ),
    row(
      'matter',
      'Photon attenuation at 1 MeV in Pb',
      `${photonAttenuation(material('Pb'), 1).toFixed(4)} cm²/g`,
      '0.07102',
      '1 %',
      'Hubbell & Seltzer, NISTIR 5632',
    ),
  ];
}

/** Beams on thick slabs, in as many histories as leave a standard error of about 1 %. */
function transportRows(): EvidenceRow[] {
  const cases = JSON.parse(readFileSync(new URL('transport/single-scattering.json', GOLDEN), 'utf8')) as {
    materialId: string;
    energyMeV: number;
    incidence: string;
    slabGPerCm2: number | null;
    numberBackscatter: number;
    depthGPerCm2: number[];
    doseMeVCm2PerG: number[];
  }[];
  const source = 'Event-by-event calculation, exact Mott and Møller collisions (fixtures/golden/transport)';
  return [
    ['Al', 1.033, 40_000],
    ['Cu', 1, 30_000],
    ['Ta', 1, 40_000],
  ].flatMap(([materialId, energyMeV, histories]) => {
    const golden = cases.find(
      (one) =>
        one.materialId === materialId &&
        one.energyMeV === energyMeV &&
        one.incidence === 'normal' &&
        one.slabGPerCm2 === null,
    );
    if (golden === undefined) throw new Error(`no case of ${materialId} at ${energyMeV} MeV`);
    const width = 2 * golden.depthGPerCm2[0];
    const bins = golden.depthGPerCm2.length;
    const ours = runBeam(
      {
        particle: 'electron',
        energyMeV: golden.energyMeV,
        incidence: { angleDeg: 0 },
        layers: [{ materialId: golden.materialId, thicknessGPerCm2: bins * width }],
        bins,
        histories: histories as number,
        seed: 1,
        photons: false,
      },
      () => 0,
    );
    const peak = (doses: readonly number[]) => Math.max(...doses);
    const beam = `${energyMeV} MeV electrons on thick ${materialId}`;
    return [
      row(
        'transport',
        `Peak dose per fluence, ${beam}`,
        `${peak(ours.doseMeVCm2PerG).toFixed(2)} MeV cm²/g`,
        `${peak(golden.doseMeVCm2PerG).toFixed(2)} MeV cm²/g`,
        materialId === 'Ta' ? '5 %' : '3 %',
        source,
      ),
      row(
        'transport',
        `Share scattered back, ${beam}`,
        ours.numberBackscatter.toFixed(3),
        golden.numberBackscatter.toFixed(3),
        materialId === 'Al' ? '0.01' : '5 %',
        source,
      ),
    ];
  });
}

function shieldRows(): EvidenceRow[] {
  const walls = Array.from({ length: 6 }, () => [{ materialId: 'Al', thicknessMm: 2 }]);
  const box = { innerSizeMm: [200, 200, 200], positionMm: [0, 0, 0], walls } as const;
  const mean = pathsIn({ kind: 'box', box }, 4096).reduce(
    (sum, { weight, walls: [wall] }) => sum + weight / wall.stretch,
    0,
  );
  const closed = (6 * 2 * Math.SQRT2 * Math.atan(1 / Math.SQRT2)) / (4 * Math.PI);
  return [
    row(
      'shielding',
      'Mean cosine to the walls of a cube, from its centre',
      mean.toFixed(4),
      closed.toFixed(4),
      '0.1 %',
      'Closed form of the integral over a square face',
    ),
  ];
}

function marginRows(): EvidenceRow[] {
  const lot = lotCapability([48, 55, 60, 66, 75], 0.9, 0.99);
  return [
    row(
      'margin',
      'K_TL for n 5, C 0.90, P 0.99',
      toleranceFactor(5, 0.9, 0.99).toFixed(3),
      '4.666',
      'printed digits',
      'Noncentral t (MIL-HDBK-814 method), exact table',
    ),
    row(
      'margin',
      'Lot limit of 48, 55, 60, 66, 75 krad(Si)',
      `${lot.limitKradSi.toFixed(2)} krad(Si)`,
      '27.13',
      'printed digits',
      'Worked example, same method',
    ),
  ];
}
