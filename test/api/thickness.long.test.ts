import { readFileSync } from 'node:fs';
import request from 'supertest';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { startService, type TestService } from './service.ts';

/** The dose at the thickness returned, relative to the target: what the solver promises. */
const SOLVED_WITHIN_REL = 0.01;
/** Two responses of their own histories: a dose may differ by this many of their combined standard errors. */
const STATISTICAL_SIGMAS = 3;

let service: TestService;
let studyId: string;
let asked: Record<string, unknown>;
let trajectoryId: string;

beforeAll(async () => {
  service = startService();
  studyId = (await request(service.app).post('/api/studies').send({ name: 'Thickness' })).body.id;
  const oem = readFileSync(new URL('../../fixtures/demo/uranus-flyby-high.oem', import.meta.url));
  const trajectory = await request(service.app)
    .post('/api/trajectories')
    .field('studyId', studyId)
    .attach('file', oem, 'path.oem');
  trajectoryId = trajectory.body.id;
  asked = {
    studyId,
    trajectoryIds: [trajectoryId],
    environment: { phase: { mode: 'published' } },
    sampling: { draws: 200, seed: 3 },
    minimumMm: 0.2,
    maximumMm: 4,
  };
});
afterAll(() => service.stop());

async function ended(path: string): Promise<Record<string, never>> {
  for (;;) {
    const { body } = await request(service.app).get(path);
    if (body.state !== 'queued' && body.state !== 'running') return body;
    await new Promise((resolve) => setTimeout(resolve, 40));
  }
}

async function assessed(name: string, thicknessMm: number) {
  const stack = await request(service.app)
    .post('/api/stacks')
    .send({ studyId, name, geometry: 'slab', layers: [{ materialId: 'Al', thicknessMm }] });
  const { environment, sampling } = asked;
  const made = await request(service.app)
    .post('/api/assessments')
    .send({
      studyId,
      name,
      trajectoryIds: [trajectoryId],
      stackIds: [stack.body.id],
      environment,
      sampling,
      sensitivity: false,
    });
  return (await ended(`/api/assessments/${made.body.id}`)) as unknown as {
    id: string;
    result: { shieldDose: { doseKradSi: { total: number }; statisticalErrorRel: number }[] };
  };
}

const slab = (materials: readonly (readonly [string, number])[]) => ({
  geometry: 'slab',
  layers: materials.map(([materialId, thicknessMm]) => ({ materialId, thicknessMm })),
});

describe('thickness for a target, assessed anew', () => {
  it('gives back the dose of a shield when that shield is asked for, and compares the two', async () => {
    const reference = await assessed('Thin', 0.5);
    const [thin] = reference.result.shieldDose;
    const targetDoseKradSi = 0.5 * thin.doseKradSi.total;
    const made = await request(service.app)
      .post('/api/thickness/jobs')
      .send({
        ...asked,
        targetDoseKradSi,
        areaM2: 1,
        candidates: [{ name: 'Aluminium', stack: slab([['Al', 1]]), layerIndex: 0 }],
      });
    expect(made.status).toBe(202);
    expect(made.headers.location).toBe(`/api/thickness/jobs/${made.body.id}`);
    const job = await ended(`/api/thickness/jobs/${made.body.id}`);
    expect(job.problem).toBeNull();
    const result = job.result as unknown as {
      lightest: number;
      solutions: {
        status: string;
        thicknessMm: number;
        massKg: number;
        stackText: string;
        doseKradSi: number;
        statisticalErrorRel: number;
      }[];
    };
    const [solution] = result.solutions;
    expect(result.lightest).toBe(0);
    expect(solution.status).toBe('solved');
    expect(Math.abs(solution.doseKradSi / targetDoseKradSi - 1)).toBeLessThan(SOLVED_WITHIN_REL);
    // 1 m² of aluminium of 2.70 g/cm³ weighs 2.70 kg a millimetre. Source: definition of areal density.
    expect(solution.massKg).toBeCloseTo(2.7 * solution.thicknessMm, 2);
    // Assessed anew at three digits, as it would stand on a drawing: a shield with its own histories.
    const anew = await assessed('As returned', Number(solution.thicknessMm.toPrecision(3)));
    const [dose] = anew.result.shieldDose;
    const statistics = STATISTICAL_SIGMAS * Math.hypot(dose.statisticalErrorRel, solution.statisticalErrorRel);
    expect(Math.abs(dose.doseKradSi.total / targetDoseKradSi - 1)).toBeLessThan(SOLVED_WITHIN_REL + statistics);

    const { body } = await request(service.app).get(`/api/assessments/${anew.id}/compare?with=${reference.id}`);
    expect(body.before).toEqual({ id: reference.id, name: 'Thin' });
    expect(body.sameResult).toBe(false);
    expect(body.inputs).toEqual(
      expect.arrayContaining([
        { kind: 'option', name: 'As returned', change: 'added' },
        { kind: 'option', name: 'Thin', change: 'removed' },
      ]),
    );
    const itself = await request(service.app).get(`/api/assessments/${anew.id}/compare?with=${anew.id}`);
    expect(itself.body).toMatchObject({ sameResult: true, inputs: [], settings: [], verdicts: [] });
    const without = await request(service.app).get(`/api/assessments/${anew.id}/compare`);
    expect(without.status).toBe(422);
  }, 240_000);
});
