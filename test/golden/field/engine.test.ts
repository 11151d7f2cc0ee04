/**
 * Source: the general-purpose npm library geomagnetism (World Magnetic Model), on its own coefficients; closed forms of the
 * centred dipole (Walt 1994, Introduction to Geomagnetically Trapped Radiation, section 3).
 */
import { describe, expect, it } from 'vitest';
import { fieldModel, makeLabel, tracedLabeller } from '../../../server/field/index.ts';
import { bLossNtAt, buildLossCurve } from '../../../server/field/lossCurve.ts';
import { type SchmidtCoefficient, sphericalHarmonicField } from '../../../server/field/sphericalHarmonic.ts';

interface GeomagnetismModel {
  point(place: [number, number, number]): { x: number; y: number; z: number };
  main_field_coeff_g: number[];
  main_field_coeff_h: number[];
}

describe('spherical harmonics', () => {
  it('agree with a geomagnetic library on its own coefficients', async () => {
    const { default: geomagnetism } = (await import('geomagnetism' as string)) as {
      default: { model: (date: Date) => GeomagnetismModel };
    };
    const library = geomagnetism.model(new Date('2025-06-01'));
    const coefficients: SchmidtCoefficient[] = [];
    for (let n = 1; n <= 12; n++) {
      for (let m = 0; m <= n; m++) {
        const index = (n * (n + 1)) / 2 + m;
        coefficients.push({ kind: 'g', n, m, valueNt: library.main_field_coeff_g[index] });
        if (m > 0) coefficients.push({ kind: 'h', n, m, valueNt: library.main_field_coeff_h[index] });
      }
    }
    const field = sphericalHarmonicField(coefficients, 12);
    const out = new Float64Array(3);
    // On the equator of the ellipsoid geodetic and geocentric coordinates coincide: north z, east y, down inward.
    for (const longitudeDeg of [0, 33, 77, 150, 201, 290]) {
      const lon = (longitudeDeg * Math.PI) / 180;
      const r = 6378.137 / 6371.2;
      field(r * Math.cos(lon), r * Math.sin(lon), 0, out);
      const east = -out[0] * Math.sin(lon) + out[1] * Math.cos(lon);
      const down = -(out[0] * Math.cos(lon) + out[1] * Math.sin(lon));
      const theirs = library.point([0, longitudeDeg > 180 ? longitudeDeg - 360 : longitudeDeg, 0]);
      const scale = Math.hypot(theirs.x, theirs.y, theirs.z);
      expect(Math.hypot(out[2] - theirs.x, east - theirs.y, down - theirs.z) / scale).toBeLessThan(1e-6);
    }
  });
});

describe('centred dipole', () => {
  const model = fieldModel('uranus-dipole');

  it('gives L = r/cos² of magnetic latitude and B_min = M/L³', () => {
    const labeller = tracedLabeller(model);
    const label = makeLabel();
    const [ax, ay, az] = model.dipoleAxis;
    // A direction perpendicular to the axis, then tilted towards it by the magnetic latitude.
    const across = Math.hypot(ax, ay);
    const ex = -ay / across;
    const ey = ax / across;
    for (const [r, latitudeDeg] of [
      [2.5, 10],
      [4, 25],
      [6, 40],
    ]) {
      const latitude = (latitudeDeg * Math.PI) / 180;
      const c = Math.cos(latitude) * r;
      const s = Math.sin(latitude) * r;
      labeller.labelInto(c * ex + s * ax, c * ey + s * ay, s * az, label);
      const exact = r / Math.cos(latitude) ** 2;
      expect(Math.abs(label.lShell / exact - 1)).toBeLessThan(1e-7);
      expect(Math.abs((label.bMinNt * exact ** 3) / model.dipoleMomentNt - 1)).toBeLessThan(1e-6);
    }
  });

  it('has the loss cone of a sphere within the flattening of the planet', () => {
    const curve = buildLossCurve(model, 0);
    for (const lShell of [2, 4, 8]) {
      const equatorial = model.dipoleMomentNt * Math.sqrt(4 - 3 / lShell);
      // The ellipsoid lies 0 to 2.5 % inside the sphere of the reference radius: B there is 0 to 8 % higher.
      const ratio = bLossNtAt(curve, lShell) / equatorial;
      expect(ratio).toBeGreaterThan(1);
      expect(ratio).toBeLessThan(1.08);
    }
  });
});
