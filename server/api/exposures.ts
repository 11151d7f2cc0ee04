import { readFile } from 'node:fs/promises';
import { deserialize } from 'node:v8';
import { type ExposureSummary, refuseOtherPlanet } from '../fluence/index.ts';
import { type EnvironmentRequest, environmentFor } from '../jobs/environment.ts';
import { withBeltTable } from './beltModels.ts';
import { defineRoute, type Route } from './routes.ts';
import { accepted, anyObject, exposureBody } from './schemas.ts';
import { found, type Shop } from './shop.ts';

/** Exposures are jobs whose id is also theirs: what they compute is kept under the hash of its inputs. */
export function exposureRoutes(shop: Shop): Route[] {
  return [
    defineRoute({
      method: 'post',
      path: '/api/exposures',
      tag: 'environment',
      summary: 'Follow a trajectory through the belts: history, peaks, spectra, by rotation phase',
      body: exposureBody,
      answer: accepted,
      status: 202,
      handler: ({ body, response }) => {
        const { trajectoryId, thresholdsMeV, compareFieldModelIds, sampling, ...asked } = body;
        const trajectory = shop.storedTrajectory(trajectoryId);
        const environment = environmentFor(
          withBeltTable(shop, asked as EnvironmentRequest),
          trajectory.planet,
          trajectory.startTdbS,
        );
        for (const id of compareFieldModelIds ?? []) refuseOtherPlanet(id, trajectory.planet, 'compareFieldModelIds');
        const summary = Object.fromEntries(
          Object.entries({ thresholdsMeV, compareFieldModelIds, sampling }).filter(([, value]) => value !== undefined),
        );
        const job = shop.runner.add('exposure', trajectoryId, { trajectoryId, environment, summary });
        response.setHeader('Location', `/api/exposures/${job.id}`);
        return { id: job.id, jobId: job.id };
      },
    }),
    defineRoute({
      method: 'get',
      path: '/api/exposures/{id}',
      tag: 'environment',
      summary: 'State of an exposure and, once done, its summary',
      answer: anyObject,
      handler: async ({ params }) => {
        const job = found(shop.runner.rows.get(params.id), 'exposure', params.id);
        let summary: ExposureSummary | null = null;
        if (job.state === 'done' && job.result !== null) {
          const { summaryKey } = JSON.parse(job.result) as { summaryKey: string };
          const path = shop.artefacts.path(summaryKey);
          if (path !== null) summary = deserialize(await readFile(path)) as ExposureSummary;
        }
        const problem = job.problem === null ? null : (JSON.parse(job.problem) as object);
        return {
          id: job.id,
          jobId: job.id,
          trajectoryId: job.subjectId,
          state: job.state,
          progress: job.progress,
          problem,
          summary,
        };
      },
    }),
  ];
}
