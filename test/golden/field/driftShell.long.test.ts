/**
 * Source: the definition of B_loss by whole drift shells (Roederer 1970, Dynamics of Geomagnetically Trapped Radiation,
 * section III), worked out line by line, against the curve that is read off the planet's surface.
 */
import { describe, expect, it } from 'vitest';
import {
  bLossNtAt,
  DriftShellTracer,
  type FieldModelId,
  fieldModel,
  lossCurve,
  traceParticle,
} from '../../../server/field/index.ts';
import { buildLossCurve } from '../../../server/field/lossCurve.ts';

/** Relative: the curve's grid of 2 degrees. */
const CURVE_REL = 0.01;

describe('B_loss of the surface against whole drift shells', () => {
  it.each<[FieldModelId, number]>([
    ['uranus-q3', 3],
    ['uranus-q3', 5],
    ['uranus-q3', 10],
    ['uranus-q3', 18],
    ['neptune-o8', 7],
    ['neptune-o8', 10],
    ['neptune-o8', 18],
  ])('%s at L = %d', (id, lShell) => {
    const model = fieldModel(id);
    const whole = new DriftShellTracer(model).bLossNt(lShell);
    expect(Math.abs(bLossNtAt(lossCurve(model), lShell) / whole - 1)).toBeLessThan(CURVE_REL);
  });

  it('shows what the surface curve misses: a sliver of longitude where shells of O8 at L = 4 dip inside', () => {
    const model = fieldModel('neptune-o8');
    const tracer = new DriftShellTracer(model);
    const surfaceNt = bLossNtAt(buildLossCurve(model, 0), 4);
    const whole = tracer.bLossNt(4);
    expect(whole).toBeLessThan(0.8 * surfaceNt);
    // The curve in use has whole shells there, whose values scatter by a fifth with the resolution.
    expect(Math.abs(bLossNtAt(lossCurve(model), 4) / whole - 1)).toBeLessThan(0.2);
    const low = tracer.shell(4, 0.95 * surfaceNt).lines.filter((line) => Math.min(...line.mirrorAltitudesKm) < 0);
    const reach = low.map((line) => line.magneticLongitudeRad);
    expect(low.length).toBeGreaterThan(1);
    // All of them within a few degrees of each other.
    expect(Math.max(...reach) - Math.min(...reach)).toBeLessThan(0.15);
  });

  it.each<[FieldModelId, number, number, 'lost' | 'trapped']>([
    ['neptune-o8', 5, 17000, 'lost'],
    ['neptune-o8', 5, 11500, 'trapped'],
    ['neptune-o8', 7, 20000, 'trapped'],
  ])('%s, L = %d, B_m = %d nT: an electron carried round by its guiding centre is %s', (id, lShell, mirrorNt, fate) => {
    const model = fieldModel(id);
    const tracer = new DriftShellTracer(model);
    const { bMinNt, minimumPoint } = tracer.shell(lShell, mirrorNt, 12).lines[0];
    const [x, y, z] = minimumPoint;
    const motion = traceParticle(
      model,
      {
        species: 'electron',
        energyMeV: 3,
        position: [x, y, z],
        pitchAngleRad: Math.asin(Math.sqrt(bMinNt / mirrorNt)),
      },
      { method: 'guidingCentre', stepsPerTurn: 60, maxSteps: 3_000_000 },
    );
    expect(motion.fate).toBe(fate);
    // The sliver lies at 294° of magnetic longitude; the electron reaches it from 360° downwards.
    if (fate === 'lost') expect(Math.abs((motion.driftAngleRad * 180) / Math.PI + 60)).toBeLessThan(15);
    expect(tracer.bLossNt(lShell) > mirrorNt).toBe(fate === 'trapped');
  });
});
