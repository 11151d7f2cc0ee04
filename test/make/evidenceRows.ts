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
import { parseEpoch } from '../../server/time/index.ts';
import { readTrajectory } from '../../server/trajectory/index.ts';

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
  return [...encounterRows(), ...fieldRows(), ...beltRows(), ...matterRows(), ...marginRows()];
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
