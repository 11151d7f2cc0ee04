/**
 * Source: closed forms of the centred dipole. Hamlin et al. (1961), J. Geophys. Res. 66, 1; Walt (1994), Introduction to
 * Geomagnetically Trapped Radiation, sections 3-4; bounce integrals by quadrature of the textbook integrands here; order
 * of the Boris push (Birdsall & Langdon 1985); circular orbit in a uniform field.
 */
import { describe, expect, it } from 'vitest';
import { AppError } from '../../../server/errors.ts';
import { BorisStepper } from '../../../server/field/boris.ts';
import { dipolePeriods } from '../../../server/field/dipolePeriods.ts';
import {
  adiabaticity,
  DriftShellTracer,
  EPSILON_LIMIT,
  type FieldModel,
  type FieldModelId,
  fieldModel,
  traceParticle,
} from '../../../server/field/index.ts';
import { momentumOverMc, rigidityNtRadii, type SpeciesId } from '../../../server/field/species.ts';

const dipole = fieldModel('uranus-dipole');
/** The demand on bounce and drift periods against the closed forms, relative. */
const PERIOD_REL = 0.01;

/** A point on the magnetic equator of a centred dipole. */
function equator(model: FieldModel, r: number): [number, number, number] {
  const [ax, ay] = model.dipoleAxis;
  const across = Math.hypot(ax, ay);
  return [(-ay / across) * r, (ax / across) * r, 0];
}

/** T and D of the dipole by quadrature: ∫ path/(4 L) and bounce-averaged gradient and curvature drift over 3 L u²/… */
function bounceIntegrals(sinAlpha: number): { t: number; drift: number } {
  const ratio = (latitude: number) => Math.sqrt(4 - 3 * Math.cos(latitude) ** 2) / Math.cos(latitude) ** 6;
  let low = 0;
  let high = 1.5;
  for (let i = 0; i < 80; i++) {
    const middle = (low + high) / 2;
    if (ratio(middle) * sinAlpha ** 2 < 1) low = middle;
    else high = middle;
  }
  let t = 0;
  let drift = 0;
  const n = 4000;
  for (let i = 0; i < n; i++) {
    // λ = λ_m sin u takes the end into a smooth one.
    const u = ((i + 0.5) / n) * (Math.PI / 2);
    const x = low * Math.sin(u);
    const s2 = Math.sin(x) ** 2;
    const perpendicular = sinAlpha ** 2 * ratio(x);
    const weight =
      (Math.cos(x) * Math.sqrt(1 + 3 * s2) * low * Math.cos(u) * (Math.PI / 2 / n)) / Math.sqrt(1 - perpendicular);
    t += weight;
    drift += (weight * (1 - perpendicular / 2) * (1 + s2) * Math.cos(x) ** 2) / (1 + 3 * s2) ** 2;
  }
  return { t, drift: drift / t };
}

describe('closed-form periods', () => {
  it('are those of the bounce integrals', () => {
    for (const alphaDeg of [10, 20, 45, 70, 89]) {
      const alpha = (alphaDeg * Math.PI) / 180;
      const { t, drift } = bounceIntegrals(Math.sin(alpha));
      const periods = dipolePeriods(dipole, 'proton', 10, 4, alpha);
      const u = momentumOverMc('proton', 10);
      const gamma = Math.sqrt(1 + u * u);
      const lightS = dipole.referenceRadiusKm / 299792.458;
      const bounce = (4 * 4 * lightS * gamma * t) / u;
      const rate =
        (3 * u * u * 4 * rigidityNtRadii('proton', dipole) * drift) / (gamma * dipole.dipoleMomentNt * lightS);
      expect(Math.abs(periods.bouncePeriodS / bounce - 1)).toBeLessThan(PERIOD_REL);
      expect(Math.abs((periods.driftPeriodS * rate) / (2 * Math.PI) - 1)).toBeLessThan(PERIOD_REL);
    }
  });

  it('have the gyrofrequency of charge over mass', () => {
    // CODATA 2018: e = 1.602176634e-19 C, m_e = 9.1093837015e-31 kg, m_p = 1.67262192369e-27 kg.
    const equatorT = (dipole.dipoleMomentNt / 27) * 1e-9;
    for (const [species, massKg] of [
      ['electron', 9.1093837015e-31],
      ['proton', 1.67262192369e-27],
    ] as const) {
      const { gyroPeriodS } = dipolePeriods(dipole, species, 1e-9, 3, 1);
      expect(Math.abs((gyroPeriodS * equatorT * 1.602176634e-19) / (2 * Math.PI * massKg) - 1)).toBeLessThan(1e-8);
    }
  });
});

describe('Boris push', () => {
  it('turns in a uniform field at the gyrofrequency with an error of second order in the step', () => {
    const uniform: FieldModel = {
      ...dipole,
      fieldInto: (_x, _y, _z, out) => {
        out[0] = 0;
        out[1] = 0;
        out[2] = 100;
        return out;
      },
    };
    const rigidity = rigidityNtRadii('proton', uniform);
    const light = 299792.458 / uniform.referenceRadiusKm;
    const u = 0.5;
    const period = (2 * Math.PI * Math.sqrt(1 + u * u) * rigidity) / (100 * light);
    const phaseError = (steps: number) => {
      const stepper = new BorisStepper(uniform, rigidity, light);
      stepper.momentum[0] = u;
      for (let i = 0; i < steps; i++) stepper.step(period / steps);
      expect(Math.abs(Math.hypot(...stepper.momentum) / u - 1)).toBeLessThan(1e-12);
      return Math.abs(Math.atan2(stepper.momentum[1], stepper.momentum[0]));
    };
    const order = Math.log2(phaseError(40) / phaseError(80));
    expect(Math.abs(order - 2)).toBeLessThan(0.01);
  });

  it('converges to second order in the multipole field', () => {
    const model = fieldModel('uranus-q3');
    const rigidity = rigidityNtRadii('proton', model);
    const light = 299792.458 / model.referenceRadiusKm;
    const end = (steps: number) => {
      const stepper = new BorisStepper(model, rigidity, light);
      stepper.position.set([2.5, 1, 0.5]);
      stepper.momentum.set([0.1, 0.12, 0.08]);
      for (let i = 0; i < steps; i++) stepper.step(2 / steps);
      return stepper.position;
    };
    const [a, b, c] = [end(2000), end(4000), end(8000)];
    const gap = (p: Float64Array, q: Float64Array) => Math.hypot(p[0] - q[0], p[1] - q[1], p[2] - q[2]);
    expect(Math.abs(Math.log2(gap(a, b) / gap(b, c)) - 2)).toBeLessThan(0.05);
  });
});

describe('one drift round the dipole', () => {
  const cases: [SpeciesId, number, number, number, 'boris' | 'guidingCentre'][] = [
    ['proton', 10, 3, 45, 'boris'],
    ['proton', 10, 3, 45, 'guidingCentre'],
    ['proton', 10, 3, 80, 'boris'],
    ['proton', 1, 3, 60, 'guidingCentre'],
    ['electron', 4, 6, 60, 'guidingCentre'],
  ];
  it.each(cases)('%s of %d MeV at L %d, %d degrees, by %s', (species, energyMeV, lShell, alphaDeg, method) => {
    const alpha = (alphaDeg * Math.PI) / 180;
    const position = equator(dipole, lShell);
    const motion = traceParticle(dipole, { species, energyMeV, position, pitchAngleRad: alpha }, { method });
    const periods = dipolePeriods(dipole, species, energyMeV, lShell, alpha);
    expect(motion.fate).toBe('trapped');
    expect(motion.method).toBe(method);
    expect(motion.bounces).toBeGreaterThan(100);
    expect(Math.abs(motion.bouncePeriodS / periods.bouncePeriodS - 1)).toBeLessThan(PERIOD_REL);
    expect(Math.abs(motion.driftPeriodS / periods.driftPeriodS - 1)).toBeLessThan(PERIOD_REL);
    // μ and J over more than a hundred bounces; far below what would matter for L (1e-2).
    expect(motion.muScatterRel).toBeLessThan(1e-4);
    expect(motion.jScatterRel).toBeLessThan(1e-4);
    expect(motion.energyErrorRel).toBeLessThan(1e-4);
  });

  it('turns with the sign of the charge: protons anticlockwise about the moment', () => {
    const start = { energyMeV: 10, position: equator(dipole, 3), pitchAngleRad: 1 } as const;
    const proton = traceParticle(dipole, { ...start, species: 'proton' }, { method: 'guidingCentre', maxBounces: 20 });
    const electron = traceParticle(
      dipole,
      { ...start, species: 'electron' },
      { method: 'guidingCentre', maxBounces: 20 },
    );
    // At Earth, whose moment points south, protons drift west: clockwise from the north, anticlockwise about the moment.
    expect(proton.driftAngleRad).toBeGreaterThan(0.02);
    expect(electron.driftAngleRad).toBeLessThan(-0.02);
  });

  it('loses a particle inside the loss cone and keeps one outside', () => {
    // Equatorial loss cone of the sphere: sin²α = 1/(L³ sqrt(4 − 3/L)); the ellipsoid lies up to 2.5 % inside it.
    const lossDeg = (Math.asin(Math.sqrt(1 / (27 * Math.sqrt(3)))) * 180) / Math.PI;
    const fate = (alphaDeg: number) =>
      traceParticle(
        dipole,
        { species: 'proton', energyMeV: 2, position: equator(dipole, 3), pitchAngleRad: (alphaDeg * Math.PI) / 180 },
        { maxBounces: 4 },
      ).fate;
    expect(fate(lossDeg - 1)).toBe('lost');
    expect(fate(lossDeg + 1)).toBe('unfinished');
  });
});

describe('one drift round the multipole field', () => {
  // The labels claim that the particle comes back with its μ and J; in the full field nothing but the equation of motion
  // keeps them, to the order of epsilon².
  it.each<[FieldModelId, number, number]>([
    ['uranus-q3', 6, 3],
    ['neptune-o8', 7, 1],
  ])('%s, L = %d: a proton of %d MeV, below the limit, comes back with its invariants', (id, lShell, energyMeV) => {
    const model = fieldModel(id);
    const shell = new DriftShellTracer(model).shell(lShell, (2 * model.dipoleMomentNt) / lShell ** 3, 12);
    const [line] = shell.lines;
    const [x, y, z] = line.minimumPoint;
    const pitchAngleRad = Math.asin(Math.sqrt(line.bMinNt / shell.mirrorNt));
    const motion = traceParticle(model, { species: 'proton', energyMeV, position: [x, y, z], pitchAngleRad });
    expect(motion.method).toBe('boris');
    expect(motion.fate).toBe('trapped');
    expect(motion.muScatterRel).toBeLessThan(0.01);
    expect(motion.jScatterRel).toBeLessThan(0.01);
    const dipoleLike = dipolePeriods(model, 'proton', energyMeV, lShell, Math.PI / 4).driftPeriodS;
    // The dipole of the same moment gives the period of a multipole shell to a few per cent.
    expect(Math.abs(motion.driftPeriodS / dipoleLike - 1)).toBeLessThan(0.1);
  });
});

describe('where the labels fail', () => {
  it('keeps μ below the limit and not above it, in the full field', () => {
    const model = fieldModel('uranus-q3');
    const [row] = adiabaticity(model, 'proton', 10, [6]);
    const scatterAt = (share: number) =>
      traceParticle(
        model,
        {
          species: 'proton',
          energyMeV: share * (row.energyLimitMeV ?? Number.NaN),
          position: equator(model, 6),
          pitchAngleRad: Math.PI / 4,
        },
        { maxBounces: 12 },
      ).muScatterRel;
    expect(scatterAt(0.03)).toBeLessThan(0.01);
    expect(scatterAt(10)).toBeGreaterThan(0.05);
  });

  it('has epsilon = 3 p L²/(q B₀ a) in the dipole', () => {
    for (const species of ['proton', 'electron'] as const) {
      const rows = adiabaticity(dipole, species, 5, [2, 5, 12]);
      for (const { lShell, epsilon, energyLimitMeV } of rows) {
        const perMomentum = (3 * lShell ** 2 * rigidityNtRadii(species, dipole)) / dipole.dipoleMomentNt;
        expect(Math.abs((epsilon ?? 0) / (perMomentum * momentumOverMc(species, 5)) - 1)).toBeLessThan(1e-5);
        const limit = momentumOverMc(species, energyLimitMeV ?? 0) * perMomentum;
        expect(Math.abs(limit / EPSILON_LIMIT - 1)).toBeLessThan(1e-5);
      }
    }
  });

  it('refuses an L, an energy and a pitch angle out of range', () => {
    expect(() => adiabaticity(dipole, 'proton', 5, [0.5])).toThrow(AppError);
    expect(() => adiabaticity(dipole, 'proton', -5, [3])).toThrow(AppError);
    expect(() => adiabaticity(dipole, 'proton', 5, [3], 0)).toThrow(AppError);
  });
});
