/**
 * Source: Ness et al. (1986), Science 233, 85, and (1989), Science 246, 1473; Connerney, Acuna & Ness (1987, 1991);
 * Russell & Dougherty (2010), Space Sci. Rev. 152, 251 (moments in T m³); Herbert (2009). Surface extremes, minimum L of
 * the satellites and the values the wrong frames give: an independent evaluation of the published coefficients.
 */
import { readFileSync } from 'node:fs';
import { describe, expect, it } from 'vitest';
import { bytesOf } from '../../../server/ephemeris/index.ts';
import { evaluatePoint, type FieldModelId, fieldModel } from '../../../server/field/index.ts';
import { bodyAxesInto, ROTATION_MODELS, rotateInto } from '../../../server/frames/rotation.ts';
import { parseEpoch } from '../../../server/time/index.ts';
import { readTrajectory } from '../../../server/trajectory/index.ts';

const GOLDEN = new URL('../../../fixtures/golden/', import.meta.url);
const DEG = Math.PI / 180;

describe('published dipoles', () => {
  it.each<[FieldModelId, number, number, number | null]>([
    ['uranus-q3', 22836.5, 58.615, 53.56],
    ['uranus-ah5', 22454.1, 59.85, null],
    ['uranus-otd', 23000, 60, 48],
    ['neptune-o8', 14243.3, 46.901, 71.96],
    ['neptune-otd', 13300, 46.8, 79.5],
  ])('%s: moment, tilt and west longitude of the axis', (id, momentNt, tiltDeg, westDeg) => {
    const { dipoleMomentNt, dipoleAxis } = fieldModel(id);
    // Half a printed digit each.
    expect(Math.abs(dipoleMomentNt - momentNt)).toBeLessThan(0.06);
    expect(Math.abs(Math.acos(dipoleAxis[2]) / DEG - tiltDeg)).toBeLessThan(0.006);
    const axisWestDeg = (360 - Math.atan2(dipoleAxis[1], dipoleAxis[0]) / DEG) % 360;
    if (westDeg !== null) expect(Math.abs(axisWestDeg - westDeg)).toBeLessThan(0.006);
  });

  it.each<[FieldModelId, number, number]>([
    ['uranus-q3', 3.9e17, 0.02],
    ['neptune-o8', 2.2e17, 0.02],
  ])('%s: moment in T m³, printed to two digits', (id, momentTM3, tolerance) => {
    const { dipoleMomentNt, referenceRadiusKm } = fieldModel(id);
    expect(Math.abs((dipoleMomentNt * 1e-9 * (referenceRadiusKm * 1e3) ** 3) / momentTM3 - 1)).toBeLessThan(tolerance);
  });
});

describe('surface extremes', () => {
  const b = new Float64Array(3);
  const extremes = (id: FieldModelId, a: number, c: number) => {
    const model = fieldModel(id);
    let [least, most, latitude, longitude] = [Number.POSITIVE_INFINITY, 0, 0, 0];
    for (let lat = -90; lat <= 90; lat += 0.5) {
      for (let lon = 0; lon < 360; lon += 0.5) {
        const [cosLat, sinLat] = [Math.cos(lat * DEG), Math.sin(lat * DEG)];
        const r = 1 / Math.hypot(cosLat / a, sinLat / c);
        model.fieldInto(r * cosLat * Math.cos(lon * DEG), r * cosLat * Math.sin(lon * DEG), r * sinLat, b);
        const gauss = Math.hypot(b[0], b[1], b[2]) * 1e-5;
        if (gauss > most) [most, latitude, longitude] = [gauss, lat, lon];
        least = Math.min(least, gauss);
      }
    }
    return { least, most, latitude, longitude };
  };

  it.each<[FieldModelId, number, number, number]>([
    ['uranus-q3', 0.8957, -47.25, 140.75],
    ['uranus-ah5', 1.4432, -29.5, 124],
    ['neptune-o8', 0.8727, -34.25, 86.75],
  ])('%s on the sphere of its radius', (id, mostGauss, latitudeDeg, longitudeDeg) => {
    const found = extremes(id, 1, 1);
    expect(Math.abs(found.most / mostGauss - 1)).toBeLessThan(1e-3);
    // Two steps of the search grid.
    expect(Math.abs(found.latitude - latitudeDeg)).toBeLessThanOrEqual(1);
    expect(Math.abs(found.longitude - longitudeDeg)).toBeLessThanOrEqual(1);
    // Near-null spots: on a grid of half a degree only the order of magnitude is meant.
    expect(found.least).toBeLessThan(0.06);
  });

  it('offset tilted dipole of Uranus: about 0.1 to 1.1 G published, 0.116 to 1.164 G evaluated', () => {
    const found = extremes('uranus-otd', 1, 1);
    expect(Math.abs(found.least / 0.116 - 1)).toBeLessThan(0.01);
    expect(Math.abs(found.most / 1.164 - 1)).toBeLessThan(0.01);
  });

  it.each<[FieldModelId, number, number, number]>([
    ['uranus-q3', 25559, 24973, 0.9437],
    ['uranus-ah5', 25559, 24973, 1.4825],
    ['neptune-o8', 24764, 24341, 0.8929],
  ])('%s on the 1-bar ellipsoid', (id, equatorialKm, polarKm, mostGauss) => {
    const { referenceRadiusKm } = fieldModel(id);
    const found = extremes(id, equatorialKm / referenceRadiusKm, polarKm / referenceRadiusKm);
    expect(Math.abs(found.most / mostGauss - 1)).toBeLessThan(1e-3);
  });
});

describe('minimum L of the satellites', () => {
  it.each<[FieldModelId, string, number, number]>([
    ['uranus-q3', 'Puck', 86000, 3.216],
    ['uranus-q3', 'Miranda', 129900, 4.941],
    ['uranus-q3', 'Ariel', 190900, 7.335],
    ['uranus-q3', 'Umbriel', 266000, 10.269],
    ['uranus-q3', 'Titania', 436300, 16.924],
    ['uranus-q3', 'Oberon', 583500, 22.676],
    ['neptune-o8', 'Despina', 52526, 1.942],
    ['neptune-o8', 'Galatea', 61953, 2.326],
    ['neptune-o8', 'Larissa', 73548, 2.792],
    ['neptune-o8', 'Proteus', 117646, 4.568],
    ['neptune-o8', 'Triton', 354759, 14.14],
  ])('%s: %s, circular equatorial orbit of %d km', (id, name, orbitKm, leastL) => {
    const model = fieldModel(id);
    const r = orbitKm / model.referenceRadiusKm;
    let least = Number.POSITIVE_INFINITY;
    for (let lon = 0; lon < 360; lon += 5) {
      const { lShell } = evaluatePoint(model, [r * Math.cos(lon * DEG), r * Math.sin(lon * DEG), 0]);
      if (lShell !== null) least = Math.min(least, lShell);
    }
    // Half a printed digit.
    expect(Math.abs(least - leastL)).toBeLessThan(name === 'Triton' ? 0.005 : 0.0006);
  });
});

describe('frames that are wrong in a known way', () => {
  const strongest = (
    file: string,
    modelId: FieldModelId,
    rotationId: 'uranus-1986' | 'neptune-2009',
    from: string,
    to: string,
    turn: (latitude: number, longitude: number, epochTdbS: number) => [number, number],
  ) => {
    const { path } = readTrajectory(bytesOf(readFileSync(new URL(`encounters/${file}`, GOLDEN))));
    const model = fieldModel(modelId);
    const state = new Float64Array(6);
    const axes = new Float64Array(9);
    const body = new Float64Array(3);
    const b = new Float64Array(3);
    let most = 0;
    let when = 0;
    for (let t = parseEpoch(from, 'UTC'); t <= parseEpoch(to, 'UTC'); t += 10) {
      path.stateInto(t, state);
      bodyAxesInto(ROTATION_MODELS[rotationId], t, 0, axes);
      rotateInto(axes, state[0], state[1], state[2], body);
      const r = Math.hypot(body[0], body[1], body[2]);
      const [lat, lon] = turn(Math.asin(body[2] / r), Math.atan2(body[1], body[0]), t);
      const radii = r / model.referenceRadiusKm;
      model.fieldInto(
        radii * Math.cos(lat) * Math.cos(lon),
        radii * Math.cos(lat) * Math.sin(lon),
        radii * Math.sin(lat),
        b,
      );
      const magnitude = Math.hypot(b[0], b[1], b[2]);
      if (magnitude > most) [most, when] = [magnitude, t];
    }
    return { most, when };
  };
  const uranus = (turn: Parameters<typeof strongest>[5]) =>
    strongest('uranus-1986.oem', 'uranus-q3', 'uranus-1986', '1986-01-24T16:00:00', '1986-01-24T20:00:00', turn);

  it('the right one gives 412.65 nT; the pole reversed with the longitude kept, a mirror image, gives 343 nT 48 minutes early', () => {
    const right = uranus((lat, lon) => [lat, lon]);
    expect(Math.abs(right.most - 412.65)).toBeLessThan(0.3);
    const wrong = uranus((lat, lon) => [-lat, lon]);
    expect(Math.abs(wrong.most - 343)).toBeLessThan(1);
    expect(Math.abs((parseEpoch('1986-01-24T17:58:51', 'UTC') - wrong.when) / 60 - 48)).toBeLessThan(2);
  });

  it('302 W pinned to closest approach, 69 s early, gives 409.6 nT', () => {
    const at = new Map<number, number>();
    uranus((lat, lon, t) => {
      at.set(Math.round(t), lon);
      return [lat, lon];
    });
    const longitude = (utc: string) => at.get(Math.round(parseEpoch(utc, 'UTC'))) ?? Number.NaN;
    // What the spacecraft and the planet turn against each other in between: 0.56°.
    const slip = longitude('1986-01-24T17:58:50') - longitude('1986-01-24T18:00:00');
    expect(Math.abs(Math.abs(slip) / DEG - 0.56)).toBeLessThan(0.02);
    expect(Math.abs(uranus((lat, lon) => [lat, lon - slip]).most - 409.6)).toBeLessThan(0.3);
  });

  it('Neptune: 10630 nT; west longitude taken for east gives 12607 nT', () => {
    const neptune = (turn: Parameters<typeof strongest>[5]) =>
      strongest('neptune-1989.oem', 'neptune-o8', 'neptune-2009', '1989-08-25T03:30:00', '1989-08-25T04:20:00', turn);
    const right = neptune((lat, lon) => [lat, lon]);
    expect(Math.abs(right.most / 10630 - 1)).toBeLessThan(2e-3);
    const wrong = neptune((lat, lon) => [lat, -lon]);
    expect(Math.abs(wrong.most / 12607 - 1)).toBeLessThan(5e-3);
  });
});
