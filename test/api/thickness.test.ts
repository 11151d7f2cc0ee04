import { readFileSync } from 'node:fs';
import request from 'supertest';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { startService, type TestService } from './service.ts';

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

const slab = (materials: readonly (readonly [string, number])[]) => ({
  geometry: 'slab',
  layers: materials.map(([materialId, thicknessMm]) => ({ materialId, thicknessMm })),
});

describe('thickness for a target', () => {
  it('refuses with a pointer before anything is queued', async () => {
    const before = service.rows();
    const candidates = [{ name: 'Al', stack: slab([['Al', 1]]), layerIndex: 0 }];
    const cases: [object, string][] = [
      [{ candidates }, '#/targetDoseKradSi'],
      [{ candidates, targetDoseKradSi: 1, partIds: ['x'] }, '#/targetDoseKradSi'],
      [{ candidates, targetDoseKradSi: 1, trajectoryIds: [] }, '#/caseIds'],
      [{ candidates: [{ ...candidates[0], layerIndex: 3 }], targetDoseKradSi: 1 }, '#/candidates/0/layerIndex'],
      [{ candidates, targetDoseKradSi: 1, maximumMm: 0.1 }, '#/maximumMm'],
      [{ candidates, targetDoseKradSi: 1, areaM2: 1, innerSphereRadiusMm: 9 }, '#/innerSphereRadiusMm'],
      [
        { candidates: [candidates[0], { name: 'X', stack: slab([['Xx', 1]]), layerIndex: 0 }], targetDoseKradSi: 1 },
        '#/candidates/1/stack/layers/0/materialId',
      ],
    ];
    for (const [over, pointer] of cases) {
      const answer = await request(service.app)
        .post('/api/thickness/jobs')
        .send({ ...asked, ...over });
      expect(answer.status, pointer).toBeGreaterThanOrEqual(400);
      expect(answer.status, pointer).toBeLessThan(500);
      expect(answer.body.errors[0].pointer).toBe(pointer);
    }
    expect(service.rows()).toEqual(before);
  });

  it('meets the margins of parts with the lightest order, at the percentile asked for', async () => {
    const part = await request(service.app)
      .post('/api/parts')
      .send({ studyId, partId: 'P', name: 'Part', placeId: 'all', capabilityKradSi: 1e4, capabilityBasis: 'test' });
    const example = await request(service.app).get('/api/other-sources/king-1974?scale=2&phase=cruise');
    expect(example.body).toMatchObject({ phase: 'cruise', fluence: { species: 'proton', example: true } });
    const made = await request(service.app)
      .post('/api/thickness/jobs')
      .send({
        ...asked,
        otherSources: [example.body],
        partIds: [part.body.id],
        requiredRdm: 2,
        percentile: 95,
        areaM2: 1,
        candidates: [
          { name: 'Al', stack: slab([['Al', 1]]), layerIndex: 0 },
          { name: 'Al, thinner floor', stack: slab([['Al', 0.2]]), layerIndex: 0 },
        ],
      });
    const job = await ended(`/api/thickness/jobs/${made.body.id}`);
    // A capability of 10 000 krad(Si) over a margin of 2: any shield meets it, so the thinnest is the answer.
    expect(job.result).toMatchObject({ targetDoseKradSi: 5000, drivingPartId: 'P', lightest: 0 });
    expect((job.result as unknown as { solutions: { status: string }[] }).solutions[0].status).toBe('metAtThinnest');
  }, 120_000);
});
