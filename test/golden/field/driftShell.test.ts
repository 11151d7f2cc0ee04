/**
 * Source: closed forms of the centred dipole (Walt 1994, Introduction to Geomagnetically Trapped Radiation, section 3); the
 * eccentric centres of Q3 and O8 from the published coefficients by the formulae of Fraser-Smith (1987), worked out
 * independently; McIlwain's L through lShell.test.ts.
 */
import { describe, expect, it } from 'vitest';
import { eccentricCentre } from '../../../server/field/eccentricCentre.ts';
import { DriftShellTracer, type FieldModelId, fieldModel, shellSplitting } from '../../../server/field/index.ts';
import { dipoleFieldRatio, dipoleInvariantOverL } from '../../../server/field/lShell.ts';

describe('eccentric dipole', () => {
  it.each<[FieldModelId, number[]]>([
    ['uranus-q3', [-0.157, 0.025, -0.314]],
    ['neptune-o8', [0.047, 0.483, 0.002]],
    ['uranus-otd', [-0.02, 0.02, -0.31]],
    ['uranus-dipole', [0, 0, 0]],
  ])('%s has its published centre', (id, published) => {
    const centre = eccentricCentre(fieldModel(id));
    // Half a printed digit, and the octupole of an offset dipole at 200 radii (2e-3).
    for (let c = 0; c < 3; c++) expect(Math.abs(centre[c] - published[c])).toBeLessThan(1e-3);
  });
});

describe('drift shells of a centred dipole', () => {
  const model = fieldModel('uranus-dipole');
  const tracer = new DriftShellTracer(model);

  it('are circles of radius L with the closed-form I and mirror points', () => {
    for (const [lShell, latitudeDeg] of [
      [2, 20],
      [5, 40],
      [9, 60],
    ]) {
      const latitude = (latitudeDeg * Math.PI) / 180;
      const mirrorNt = (model.dipoleMomentNt / lShell ** 3) * dipoleFieldRatio(latitude);
      const shell = tracer.shell(lShell, mirrorNt, 12);
      expect(shell.closed).toBe(true);
      for (const line of shell.lines) {
        expect(Math.abs(line.equatorialRadius / lShell - 1)).toBeLessThan(1e-6);
        expect(Math.abs(line.invariantI / (lShell * dipoleInvariantOverL(latitude)) - 1)).toBeLessThan(1e-6);
        expect(Math.abs((line.bMinNt * lShell ** 3) / model.dipoleMomentNt - 1)).toBeLessThan(1e-6);
        for (const point of line.mirrorPoints) {
          expect(Math.abs(Math.hypot(...point) / (lShell * Math.cos(latitude) ** 2) - 1)).toBeLessThan(1e-6);
        }
      }
    }
  });

  it('have the loss cone sin²α = B_min/B_loss of the ellipsoid, found by its closed form', () => {
    const a = 25559 / model.referenceRadiusKm;
    const c = 24973 / model.referenceRadiusKm;
    const [ax, ay, az] = model.dipoleAxis;
    for (const lShell of [2, 5, 12]) {
      // Least B among the points where dipole lines of this L meet the ellipsoid, line by line, both hemispheres.
      let least = Number.POSITIVE_INFINITY;
      const across = Math.hypot(ax, ay);
      const e = [-ay / across, ax / across, 0];
      const f = [ay * e[2] - az * e[1], az * e[0] - ax * e[2], ax * e[1] - ay * e[0]];
      for (let i = 0; i < 1440; i++) {
        const phi = (i * Math.PI) / 720;
        for (const side of [1, -1]) {
          let low = 0;
          let high = Math.PI / 2;
          for (let step = 0; step < 50; step++) {
            const latitude = (low + high) / 2;
            const r = lShell * Math.cos(latitude) ** 2;
            const [p, q] = [r * Math.cos(latitude), side * r * Math.sin(latitude)];
            const at = [ax, ay, az].map((n, k) => p * (Math.cos(phi) * e[k] + Math.sin(phi) * f[k]) + q * n);
            if ((at[0] ** 2 + at[1] ** 2) / a ** 2 + at[2] ** 2 / c ** 2 > 1) low = latitude;
            else high = latitude;
          }
          least = Math.min(least, (model.dipoleMomentNt / lShell ** 3) * dipoleFieldRatio(low));
        }
      }
      const bLossNt = tracer.bLossNt(lShell);
      expect(Math.abs(bLossNt / least - 1)).toBeLessThan(2e-4);
      const bMinNt = model.dipoleMomentNt / lShell ** 3;
      expect(Math.abs(Math.sin(tracer.driftLossConeRad(lShell, bMinNt)) ** 2 / (bMinNt / least) - 1)).toBeLessThan(
        2e-4,
      );
    }
  });
});

describe('shell splitting', () => {
  const spreads = (id: FieldModelId, r: number): number[] => {
    const all: number[] = [];
    for (let lat = -75; lat <= 75; lat += 30) {
      for (let lon = 0; lon < 360; lon += 45) {
        const [a, o] = [(lat * Math.PI) / 180, (lon * Math.PI) / 180];
        const point = [r * Math.cos(a) * Math.cos(o), r * Math.cos(a) * Math.sin(o), r * Math.sin(a)] as const;
        const splitting = shellSplitting(fieldModel(id), [...point]);
        if (splitting !== null) all.push(splitting.lnLSpread);
      }
    }
    return all.sort((p, q) => p - q);
  };

  it('is nothing in a dipole', () => {
    const all = spreads('uranus-dipole', 3);
    expect(all.length).toBeGreaterThan(30);
    expect(all[all.length - 1]).toBeLessThan(1e-6);
  });

  it('keeps L to 1.3 % at most points from 3 radii on, and takes it far off near Neptune', () => {
    for (const id of ['uranus-q3', 'neptune-o8'] as const) {
      for (const r of [3, 6]) {
        const all = spreads(id, r);
        expect(all[all.length >> 1]).toBeLessThan(0.013);
        // Single points, close to lines with several minima, lie far above the median.
        expect(all[all.length - 1]).toBeLessThan(0.1);
        expect(all[all.length - 1]).toBeGreaterThan(0.005);
      }
    }
    const near = spreads('neptune-o8', 1.5);
    expect(near[near.length - 1]).toBeGreaterThan(0.05);
  });
});
