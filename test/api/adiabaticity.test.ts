import request from 'supertest';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { startService, type TestService } from './service.ts';

let service: TestService;
beforeAll(() => {
  service = startService();
});
afterAll(() => service.stop());

describe('adiabaticity of a field model', () => {
  it('lists periods and the energy limit by L, in closed form for a dipole', async () => {
    const answer = await request(service.app).get(
      '/api/field-models/uranus-dipole/adiabaticity?species=proton&energyMeV=10',
    );
    expect(answer.status).toBe(200);
    const rows: { lShell: number; energyLimitMeV: number; epsilon: number; adiabatic: boolean }[] = answer.body.items;
    expect(rows.length).toBeGreaterThan(8);
    // epsilon = 3 p L²/(q B₀ a): as L², so the ratio of two rows says it.
    const [two, ten] = [2, 10].map((l) => rows.find((row) => row.lShell === l)?.epsilon ?? Number.NaN);
    expect(Math.abs(ten / two - 25)).toBeLessThan(1e-3);
    for (let i = 1; i < rows.length; i++) expect(rows[i].energyLimitMeV).toBeLessThan(rows[i - 1].energyLimitMeV);
    for (const row of rows) expect(row.adiabatic).toBe(row.energyLimitMeV > 10);
  });

  it('refuses an unknown model, species and a negative energy', async () => {
    const get = (path: string) => request(service.app).get(`/api/field-models/${path}`);
    const unknown = await get('nowhere/adiabaticity?species=proton&energyMeV=1');
    expect(unknown.body.code).toBe('FIELD_MODEL_UNKNOWN');
    expect((await get('uranus-q3/adiabaticity?species=muon&energyMeV=1')).status).toBe(422);
    expect((await get('uranus-q3/adiabaticity?species=proton&energyMeV=-1')).body.code).toBe('FIELD_POINT_INVALID');
  });
});
