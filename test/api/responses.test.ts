import request from 'supertest';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { startService, type TestService } from './service.ts';

let service: TestService;
let stackId: string;

beforeAll(async () => {
  service = startService();
  const { id: studyId } = (await request(service.app).post('/api/studies').send({ name: 'Responses' })).body;
  const stack = { studyId, name: 'Thin', geometry: 'slab', layers: [{ materialId: 'Al', thicknessMm: 0.2 }] };
  stackId = (await request(service.app).post('/api/stacks').send(stack)).body.id;
});
afterAll(() => service.stop());

async function done(jobId: string): Promise<{ state: string; problem: { code: string } | null }> {
  for (;;) {
    const { body } = await request(service.app).get(`/api/jobs/${jobId}`);
    if (!['queued', 'running'].includes(body.state)) return body;
    await new Promise((resolve) => setTimeout(resolve, 50));
  }
}

describe('responses', () => {
  it('are made by a job and then read under their hash, errors and energy grids included', async () => {
    const made = await request(service.app).post(`/api/stacks/${stackId}/response`).send({});
    expect(made.status).toBe(202);
    expect(made.headers.location).toBe(`/api/responses/${made.body.id}`);
    expect((await done(made.body.jobId)).state).toBe('done');
    const { body } = await request(service.app).get(made.headers.location);
    expect(body.sha256).toBe(made.body.id);
    expect(body.electron.binEdgesMeV).toHaveLength(91);
    expect(body.electron.doseSigmaGyCm2).toHaveLength(90);
    expect(body.referenceErrorRel).toBeLessThan(0.022);
    const again = await request(service.app).post(`/api/stacks/${stackId}/response`).send({ effort: 'standard' });
    expect(again.body.id).toBe(made.body.id);
  });

  it('of a box are put together from those that ship', async () => {
    const walls = Array.from({ length: 6 }, () => [{ materialId: 'Al', thicknessMm: 3 }]);
    const shield = { kind: 'box', box: { innerSizeMm: [300, 300, 200], walls } };
    const made = await request(service.app).post('/api/responses').send({ shield });
    expect((await done(made.body.jobId)).state).toBe('done');
    const { body } = await request(service.app).get(`/api/responses/${made.body.id}`);
    expect(body.description).toMatch(/rays of equal solid angle/);
  });

  it('refuse a shield whose sectors do not close, and an answer that does not exist', async () => {
    const stack = { geometry: 'slab', layers: [{ materialId: 'Al', thicknessMm: 1 }] };
    const shield = { kind: 'sectors', sectors: [{ fraction: 0.5, stack }] };
    const refused = await request(service.app).post('/api/responses').send({ shield });
    expect(refused.status).toBe(422);
    expect(refused.body.code).toBe('SHIELD_INVALID');
    expect(refused.body.errors[0].pointer).toBe('#/shield/sectors');
    expect((await request(service.app).get('/api/responses/none')).status).toBe(404);
    expect((await request(service.app).post(`/api/stacks/${stackId}/response`).send({ effort: 'quick' })).status).toBe(
      422,
    );
  });
});
