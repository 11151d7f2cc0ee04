import { readFileSync } from 'node:fs';
import request from 'supertest';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { assessmentResultSchema } from '../../server/api/resultSchema.ts';
import { startService, type TestService } from './service.ts';

const CANCEL_LIMIT_MS = 1000;
let service: TestService;
let body: object;

beforeAll(async () => {
  service = startService();
  const { id: studyId } = (await request(service.app).post('/api/studies').send({ name: 'Jobs' })).body;
  const oem = readFileSync(new URL('../../fixtures/demo/uranus-flyby-high.oem', import.meta.url));
  const trajectory = await request(service.app)
    .post('/api/trajectories')
    .field('studyId', studyId)
    .attach('file', oem, 'path.oem');
  const stack = await request(service.app)
    .post('/api/stacks')
    .send({ studyId, name: 'Thin', geometry: 'slab', layers: [{ materialId: 'Al', thicknessMm: 0.3 }] });
  await request(service.app)
    .post('/api/parts')
    .send({ studyId, partId: 'A', name: '=SUM(1)', placeId: 'all', capabilityKradSi: 5, capabilityBasis: 'test' });
  body = {
    studyId,
    name: 'Assessment',
    trajectoryIds: [trajectory.body.id],
    stackIds: [stack.body.id],
    environment: { phase: { mode: 'published' } },
    sampling: { draws: 200, seed: 3 },
    otherTargetMaterialIds: ['SiO2'],
  };
});
afterAll(() => service.stop());

async function until(path: string, wanted: (state: string) => boolean): Promise<Record<string, unknown>> {
  for (;;) {
    const answer = await request(service.app).get(path);
    if (wanted(answer.body.state as string)) return answer.body as Record<string, unknown>;
    await new Promise((resolve) => setTimeout(resolve, 40));
  }
}
const ended = (state: string) => state !== 'queued' && state !== 'running';

describe('jobs', () => {
  it('cancels a running assessment within a second and has no result then', async () => {
    const made = await request(service.app).post('/api/assessments').send(body);
    expect(made.status).toBe(202);
    await until(`/api/jobs/${made.body.jobId}`, (state) => state === 'running');
    const started = Date.now();
    await request(service.app).post(`/api/jobs/${made.body.jobId}/cancel`);
    const job = await until(`/api/jobs/${made.body.jobId}`, ended);
    expect(job.state).toBe('cancelled');
    expect(Date.now() - started).toBeLessThan(CANCEL_LIMIT_MS);
    const result = await request(service.app).get(`/api/assessments/${made.body.id}/result.json`);
    expect(result.body.code).toBe('CONFLICT');
  });

  it('takes up what an interrupted process left, and gives the same numbers again', async () => {
    const first = await request(service.app).post('/api/assessments').send(body);
    await until(`/api/jobs/${first.body.jobId}`, ended);
    const again = await request(service.app).post('/api/assessments').send(body);
    await until(`/api/jobs/${again.body.jobId}`, ended);
    // As a crash leaves it: running in the table, with nobody at work.
    service.shop.store.prepare("UPDATE jobs SET state = 'running' WHERE id = ?").run(again.body.jobId);
    service.shop.runner.start();
    await until(`/api/jobs/${again.body.jobId}`, ended);
    const hashes = await Promise.all(
      [first, again].map(async ({ body: made }) => {
        const { result } = (await request(service.app).get(`/api/assessments/${made.id}`)).body;
        return result.provenance.resultSha256 as string;
      }),
    );
    expect(hashes[0]).toBe(hashes[1]);
    const { body: compared } = await request(service.app).get(
      `/api/assessments/${again.body.id}/compare?with=${first.body.id}`,
    );
    expect(compared).toMatchObject({ sameResult: true, inputs: [], settings: [], verdicts: [] });
    expect(compared.doses.map((row: { ratio: number }) => row.ratio)).toEqual([1]);
    expect(compared.margins).toHaveLength(1);
    const unfinished = await request(service.app).get(`/api/assessments/${again.body.id}/compare?with=none`);
    expect(unfinished.body.code).toBe('NOT_FOUND');
  }, 120_000);

  it('writes the numbers of the result into its table, with formulas made harmless', async () => {
    const { items } = (await request(service.app).get('/api/assessments')).body;
    const done = items.find((item: { state: string }) => item.state === 'done');
    const { result } = (await request(service.app).get(`/api/assessments/${done.id}`)).body;
    // What the schema does not describe is stripped by it: nothing may be missing.
    expect(assessmentResultSchema.parse(result)).toEqual(result);
    const { text } = await request(service.app).get(`/api/assessments/${done.id}/table.csv`);
    expect(text).toContain(String(result.shieldDose[0].doseKradSi.total));
    const [{ doseKradSi, otherTargets }] = result.shieldDose;
    const [{ thinner10Pct, thicker10Pct }] = result.sensitivity;
    expect(otherTargets[0].targetMaterialId).toBe('SiO2');
    // Stopping powers of SiO2 and silicon differ by some per cent only.
    expect(Math.abs(otherTargets[0].doseKrad.total / doseKradSi.total - 1)).toBeLessThan(0.15);
    expect(thinner10Pct.doseKradSi).toBeGreaterThan(doseKradSi.total);
    expect(thicker10Pct.doseKradSi).toBeLessThan(doseKradSi.total);
    expect(text).toContain(String(result.margins[0].achievedRdmP95));
    expect(text).toContain("'=SUM(1)");
  });

  it('leaves a shield outside the validity unassessed, with the reason, and assesses a box of aluminium beside it', async () => {
    const asked = body as { studyId: string };
    const wall = (i: number, materialId: string) => [{ materialId, thicknessMm: 1 + 0.1 * i }];
    const walls = (materialId: string) => Array.from({ length: 6 }, (_, i) => wall(i, materialId));
    const box = { innerSizeMm: [200, 200, 200], positionMm: [10, 0, 0] };
    const inner = { innerSizeMm: [40, 50, 60], positionMm: [0, 5, 0], walls: walls('Cu') };
    const place = (placeId: string, shield: object) => ({ placeId, name: placeId, shield });
    const option = await request(service.app)
      .post('/api/options')
      .send({
        studyId: asked.studyId,
        name: 'Boxes',
        places: [
          place('everywhere-different', { kind: 'box', box: { ...box, walls: walls('Ta'), inner } }),
          place('aluminium', { kind: 'box', box: { ...box, walls: Array.from({ length: 6 }, () => wall(20, 'Al')) } }),
        ],
      });
    expect(option.status).toBe(201);
    expect(option.body.places[1].massKg).toBeGreaterThan(1.9);
    // Silica at the centre of the box's walls would need histories; silicon has them shipped.
    const { stackIds: _stacks, otherTargetMaterialIds: _targets, ...rest } = body as Record<string, unknown>;
    const made = await request(service.app)
      .post('/api/assessments')
      .send({ ...rest, optionIds: [option.body.id] });
    await until(`/api/jobs/${made.body.jobId}`, ended);
    const { result } = (await request(service.app).get(`/api/assessments/${made.body.id}`)).body;
    const row = (placeId: string) => result.shieldDose.find((one: { placeId: string }) => one.placeId === placeId);
    expect(row('everywhere-different').doseKradSi).toBeNull();
    expect(row('everywhere-different').notAssessed).toMatch(/the limit is 60/);
    expect(row('aluminium').doseKradSi.total).toBeGreaterThan(0);
    const { places } = result.options[0];
    expect(places[1].geometry).toBe('box');
    expect(places[1].response.description).toMatch(/rays of equal solid angle/);
  });

  it('keeps an assessment unchanged when its stack is deleted', async () => {
    const { items } = (await request(service.app).get('/api/assessments')).body;
    const done = items.find((item: { state: string }) => item.state === 'done');
    const before = (await request(service.app).get(`/api/assessments/${done.id}/result.json`)).text;
    const stack = (await request(service.app).get('/api/stacks')).body.items[0];
    expect((await request(service.app).delete(`/api/stacks/${stack.id}`)).status).toBe(204);
    expect((await request(service.app).get(`/api/assessments/${done.id}/result.json`)).text).toBe(before);
  });
});
