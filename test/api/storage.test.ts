import { existsSync, readFileSync, utimesSync, writeFileSync } from 'node:fs';
import request from 'supertest';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { sweepBlobs } from '../../db/sweep.ts';
import { startService, type TestService } from './service.ts';

let service: TestService;
let studyId: string;
beforeAll(async () => {
  service = startService();
  studyId = (await request(service.app).post('/api/studies').send({ name: 'Store' })).body.id;
});
afterAll(() => service.stop());

async function upload(comment: string) {
  const oem = readFileSync(new URL('../../fixtures/demo/uranus-flyby-high.oem', import.meta.url), 'utf8');
  const answer = await request(service.app)
    .post('/api/trajectories')
    .field('studyId', studyId)
    .attach('file', Buffer.from(oem.replace('CREATION_DATE', `COMMENT ${comment}\nCREATION_DATE`)), 'path.oem');
  expect(answer.status).toBe(201);
  return answer.body as { id: string; sha256: string };
}

describe('what is stored', () => {
  it('refuses to delete a trajectory that a case flies, naming the case', async () => {
    const { id } = await upload('flown');
    const legs = [{ trajectoryId: id, repetitions: 2 }];
    const flown = await request(service.app).post('/api/cases').send({ studyId, name: 'Tour A', legs });
    const refused = await request(service.app).delete(`/api/trajectories/${id}`);
    expect(refused.status).toBe(409);
    expect(refused.body.detail).toContain('"Tour A"');
    expect(refused.body.errors).toEqual([expect.objectContaining({ field: 'caseId', got: flown.body.id })]);
    expect((await request(service.app).get(`/api/trajectories/${id}`)).status).toBe(200);
    await request(service.app).delete(`/api/cases/${flown.body.id}`);
    expect((await request(service.app).delete(`/api/trajectories/${id}`)).status).toBe(204);
  });

  it('sweeps what nothing refers to, and only that', async () => {
    const kept = await upload('kept');
    const gone = await upload('gone');
    await request(service.app).delete(`/api/trajectories/${gone.id}`);
    const { blobs, store, artefacts } = service.shop;
    const artefact = artefacts.put('some key', 'response', { a: 1 });
    const pdfSha256 = blobs.put(Buffer.from('a report'));
    service.shop.reports.insert(studyId, 'Report', { pdfSha256 } as never);
    const half = blobs.path('.new-half');
    writeFileSync(half, 'cut short');
    const young = blobs.put(Buffer.from('just written'));
    // Everything but the last is of yesterday.
    const yesterday = new Date(Date.now() - 86_400_000);
    for (const path of [blobs.path(kept.sha256), blobs.path(gone.sha256), artefact, blobs.path(pdfSha256), half]) {
      if (existsSync(path)) utimesSync(path, yesterday, yesterday);
    }
    sweepBlobs(store, blobs);
    expect(existsSync(blobs.path(kept.sha256))).toBe(true);
    expect(existsSync(artefact)).toBe(true);
    expect(existsSync(blobs.path(pdfSha256))).toBe(true);
    expect(existsSync(blobs.path(young))).toBe(true);
    expect(existsSync(blobs.path(gone.sha256))).toBe(false);
    expect(existsSync(half)).toBe(false);
  });
});
