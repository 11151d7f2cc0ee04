import { readFileSync } from 'node:fs';
import request from 'supertest';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { startService, type TestService } from './service.ts';

const OEM = readFileSync(new URL('../../fixtures/demo/uranus-flyby-high.oem', import.meta.url));
const FIXED = { phase: { mode: 'offset', offsetDeg: 0 }, thresholdsMeV: { electron: [0.5, 1], proton: [5] } };
const JOB_TIMEOUT_MS = 60_000;
let service: TestService;
let trajectoryId: string;
let studyId: string;

beforeAll(async () => {
  service = startService();
  const study = await request(service.app).post('/api/studies').send({ name: 'Tables' });
  studyId = study.body.id;
  const made = await request(service.app)
    .post('/api/trajectories')
    .field('studyId', studyId)
    .attach('file', OEM, 'path.oem');
  expect(made.status, JSON.stringify(made.body)).toBe(201);
  trajectoryId = made.body.id;
});
afterAll(() => service.stop());

/** An invented table: electrons that fall with L and energy and peak at the equator. */
function table(change: (good: ReturnType<typeof block>) => object = (same) => same, scale = 1): object {
  return {
    name: 'Invented belts',
    planet: 'uranus',
    source: 'Invented for a test',
    validity: 'L 2 to 18, electrons of 0.1 to 20 MeV',
    species: { electron: change(block(scale)) },
  };
}

function block(scale: number) {
  const lShells = [2, 4, 8, 18];
  const equatorialPitchAnglesDeg = [5, 45, 90];
  const energiesMeV = [0.1, 1, 20];
  const intensityPerCm2SSrMeV = lShells.map((l) =>
    equatorialPitchAnglesDeg.map((deg) =>
      energiesMeV.map((energy) => scale * 1e8 * (deg / 90) * l ** -4 * energy ** -3),
    ),
  );
  return { lShells, equatorialPitchAnglesDeg, energiesMeV, intensityPerCm2SSrMeV, sigmaDex: [1, 0.4, 0.5, 0.6] };
}

const post = (body: object) => request(service.app).post('/api/belt-models').send(body);

async function exposure(body: object): Promise<Record<string, never>> {
  const asked = await request(service.app)
    .post('/api/exposures')
    .send({ trajectoryId, ...FIXED, ...body });
  expect(asked.status, JSON.stringify(asked.body)).toBe(202);
  for (;;) {
    const { body: state } = await request(service.app).get(`/api/exposures/${asked.body.id}`);
    if (state.state === 'done') return state.summary;
    if (state.state === 'failed') throw new Error(JSON.stringify(state.problem));
    await new Promise((resolve) => setTimeout(resolve, 50));
  }
}

describe('belt tables', () => {
  it('are stored, listed with their source, used by content and deleted', { timeout: JOB_TIMEOUT_MS }, async () => {
    const made = await post(table());
    expect(made.status, JSON.stringify(made.body)).toBe(201);
    const { id, sha256 } = made.body;
    const listed = await request(service.app).get('/api/belt-models');
    expect(listed.body.items.map((item: { id: string }) => item.id)).toEqual(['uranus-belts-1', 'neptune-belts-1', id]);
    expect(listed.body.items[2]).toMatchObject({ source: 'Invented for a test', planet: 'uranus', lMin: 2, lMax: 18 });
    const one = await request(service.app).get(`/api/belt-models/${id}`);
    expect(one.body.table.species.electron.lShells).toEqual([2, 4, 8, 18]);

    const summary = await exposure({ beltModelId: id });
    expect(summary).toMatchObject({ beltModelId: id, environment: { beltTableSha256: sha256 } });
    const double = (await post(table(undefined, 2))).body;
    const twice = await exposure({ beltModelId: double.id });
    const [first, second] = [summary, twice].map(
      (s) => (s as unknown as { species: { electron: { fluencePerCm2: number[] } } }).species.electron.fluencePerCm2,
    );
    expect(first[1]).toBeGreaterThan(0);
    // Twice the table is twice the fluence, to the rounding of single precision.
    for (let k = 0; k < first.length; k++) expect(second[k] / first[k]).toBeCloseTo(2, 5);

    expect((await request(service.app).delete(`/api/belt-models/${id}`)).status).toBe(204);
    expect((await request(service.app).get(`/api/belt-models/${id}`)).status).toBe(404);
    const gone = await request(service.app).post('/api/exposures').send({ trajectoryId, beltModelId: id });
    expect(gone.body.code).toBe('BELT_MODEL_UNKNOWN');
  });

  it('stay with an assessment when they are deleted', { timeout: JOB_TIMEOUT_MS }, async () => {
    const { id, sha256 } = (await post(table())).body;
    const stack = await request(service.app)
      .post('/api/stacks')
      .send({ studyId, name: 'Thin', geometry: 'slab', layers: [{ materialId: 'Al', thicknessMm: 0.3 }] });
    const made = await request(service.app)
      .post('/api/assessments')
      .send({
        studyId,
        name: 'With a table',
        trajectoryIds: [trajectoryId],
        stackIds: [stack.body.id],
        environment: { phase: { mode: 'published' }, beltModelId: id },
        sampling: { draws: 100, seed: 1 },
        sensitivity: false,
      });
    expect(made.status, JSON.stringify(made.body)).toBe(202);
    // At once, while the job has yet to follow the path: the assessment alone holds on to the table.
    expect((await request(service.app).delete(`/api/belt-models/${id}`)).status).toBe(204);
    for (;;) {
      const { body } = await request(service.app).get(`/api/jobs/${made.body.jobId}`);
      if (body.state === 'failed') throw new Error(JSON.stringify(body.problem));
      if (body.state === 'done') break;
      await new Promise((resolve) => setTimeout(resolve, 50));
    }
    const { body: result } = await request(service.app).get(`/api/assessments/${made.body.id}/result.json`);
    expect(result.trajectories[0].environment).toMatchObject({ beltModelId: id, beltTableSha256: sha256 });
  });

  it.each([
    ['an axis that goes back', { lShells: [2, 8, 4, 18] }, /lShells\[2\].*4.*8/],
    ['an L below the planet', { lShells: [0.5, 4, 8, 18] }, /lShells\[0\].*0\.5.*1/],
    ['no 90 degrees', { equatorialPitchAnglesDeg: [5, 45, 80] }, /equatorialPitchAnglesDeg\[2\].*80.*90/],
    ['a sheet too few', { lShells: [2, 4, 8, 12, 18] }, /intensityPerCm2SSrMeV.*4.*5/],
    ['a spread beyond reason', { sigmaDex: [1, 0.4, 0.5, 9] }, /sigmaDex\[3\].*9.*3/],
  ])('refuse %s', async (_, change, words) => {
    const before = service.rows();
    const answer = await post(table((good) => ({ ...good, ...change })));
    expect(answer.status).toBe(422);
    expect(answer.body.code).toBe('BELT_TABLE_INVALID');
    expect(answer.body.detail).toMatch(words);
    expect(service.rows()).toEqual(before);
  });

  it('refuse a negative flux with its place', async () => {
    const answer = await post(
      table((good) => {
        good.intensityPerCm2SSrMeV[1][2][0] = -3;
        return good;
      }),
    );
    expect(answer.body.detail).toMatch(/intensityPerCm2SSrMeV\[1\]\[2\]\[0\].*-3/);
  });

  it('refuse scenarios that belong to the built-in belts, and the deletion of those', async () => {
    const { id } = (await post(table())).body;
    const asked = await request(service.app)
      .post('/api/exposures')
      .send({ trajectoryId, beltModelId: id, satelliteDips: true });
    expect(asked.body.code).toBe('BELT_OPTION_REFUSED');
    expect((await request(service.app).delete('/api/belt-models/uranus-belts-1')).status).toBe(409);
  });
});

describe('options of an exposure', () => {
  it('reach the summary', { timeout: JOB_TIMEOUT_MS }, async () => {
    const summary = (await exposure({
      compareFieldModelIds: ['uranus-otd'],
      sampling: { draws: 200, seed: 5 },
      protonUpperBound: true,
    })) as unknown as Record<string, { draws: number; seed: number; electron: unknown[]; proton: unknown[] }> & {
      fieldComparison: { fieldModelId: string }[];
    };
    expect(summary.thresholdsBySpeciesMeV).toEqual(FIXED.thresholdsMeV);
    expect(summary.fieldComparison.map(({ fieldModelId }) => fieldModelId)).toEqual(['uranus-q3', 'uranus-otd']);
    expect(summary.percentiles).toMatchObject({ draws: 200, seed: 5 });
    expect(summary.percentiles.electron).toHaveLength(2);
    expect(summary.percentiles.proton).toHaveLength(1);
  });

  it('name a field model of the other planet', async () => {
    const answer = await request(service.app)
      .post('/api/exposures')
      .send({ trajectoryId, compareFieldModelIds: ['neptune-o8'] });
    expect(answer.status).toBe(422);
    expect(JSON.stringify(answer.body)).toMatch(/compareFieldModelIds/);
  });
});
