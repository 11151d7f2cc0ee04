import express, { type Express, type NextFunction, type Request, type Response } from 'express';
import helmet from 'helmet';
import type { Logger } from 'pino';
import { assessmentRoutes } from './api/assessments.ts';
import { beltModelRoutes } from './api/beltModels.ts';
import { catalogueRoutes } from './api/catalogue.ts';
import { comparisonRoutes } from './api/comparison.ts';
import { exposureRoutes } from './api/exposures.ts';
import { jobRoutes } from './api/jobs.ts';
import { DOCUMENTATION_CSS, documentationPage, openApiDocument } from './api/openapi.ts';
import { otherSourceRoutes } from './api/otherSources.ts';
import { problemOf } from './api/problem.ts';
import { reportRoutes } from './api/reports.ts';
import { responseRoutes } from './api/responses.ts';
import { schemaRoutes } from './api/resultSchema.ts';
import { mountRoutes } from './api/routes.ts';
import type { Shop } from './api/shop.ts';
import { studyRoutes } from './api/studyRoutes.ts';
import { thicknessRoutes } from './api/thickness.ts';
import { trajectoryRoutes } from './api/trajectories.ts';
import type { Config } from './config.ts';
import { AppError } from './errors.ts';

const LOOPBACK_NAMES = new Set(['127.0.0.1', 'localhost', '[::1]']);

/** Composes the service; it listens elsewhere. `client` serves the pages and comes last. */
export function createApp(shop: Shop, config: Config, log: Logger, client?: express.RequestHandler): Express {
  const app = express();
  app.disable('x-powered-by');
  app.use(
    helmet({
      contentSecurityPolicy: {
        useDefaults: false,
        directives: {
          defaultSrc: ["'none'"],
          scriptSrc: ["'self'"],
          styleSrc: ["'self'"],
          imgSrc: ["'self'", 'data:', 'blob:'],
          connectSrc: ["'self'"],
          fontSrc: ["'self'"],
          formAction: ["'self'"],
          frameAncestors: ["'none'"],
          baseUri: ["'none'"],
        },
      },
      crossOriginEmbedderPolicy: false,
      strictTransportSecurity: false,
    }),
  );
  app.use(guard(config));
  app.use('/api', express.json({ limit: '8mb' }));
  app.use('/api', express.text({ type: 'text/csv', limit: '8mb' }));

  const routes = [
    ...catalogueRoutes(shop),
    ...beltModelRoutes(shop),
    ...studyRoutes(shop),
    ...trajectoryRoutes(shop, config.maxUploadBytes),
    ...exposureRoutes(shop),
    ...assessmentRoutes(shop),
    ...comparisonRoutes(shop),
    ...otherSourceRoutes(),
    ...schemaRoutes(),
    ...thicknessRoutes(shop),
    ...responseRoutes(shop),
    ...reportRoutes(shop),
    ...jobRoutes(shop),
  ];
  mountRoutes(app, routes);
  const document = openApiDocument(routes);
  const page = documentationPage(routes);
  app.get('/api/openapi.json', (_request, response) => void response.json(document));
  app.get('/api/docs', (_request, response) => void response.type('html').send(page));
  app.get('/api/docs.css', (_request, response) => void response.type('css').send(DOCUMENTATION_CSS));
  app.use('/api', (request) => {
    throw new AppError('NOT_FOUND', `${request.method} ${request.originalUrl} is not a call of this service.`);
  });
  if (client !== undefined) app.use(client);

  app.use((error: unknown, request: Request, response: Response, _next: NextFunction) => {
    const problem = problemOf(asRefusal(error), request.originalUrl);
    if (problem.status >= 500) log.error({ err: error, instance: problem.instance }, 'defect');
    if (response.headersSent) {
      response.end();
      return;
    }
    response.status(problem.status).type('application/problem+json').send(JSON.stringify(problem));
  });
  return app;
}

/** What Express' own parsers throw, as refusals of ours. */
function asRefusal(error: unknown): unknown {
  const kind = (error as { type?: string }).type;
  if (kind === 'entity.too.large') return new AppError('TOO_LARGE', 'The body is larger than 8 MB.');
  if (kind === 'entity.parse.failed') {
    return new AppError('BODY_UNREADABLE', `The body is not JSON: ${(error as Error).message}.`);
  }
  return error;
}

/** Who may call: the right host name, no foreign page, and the token where one is set. */
function guard(config: Config): express.RequestHandler {
  return (request, _response, next) => {
    const host = (request.headers.host ?? '').replace(/:\d+$/, '');
    if (!LOOPBACK_NAMES.has(host) && host !== config.host && config.token === null) {
      throw new AppError('HOST_REFUSED', `Host "${host}" is not this service.`, [
        { field: 'Host', detail: 'not allowed', got: host },
      ]);
    }
    const { origin } = request.headers;
    if (request.method !== 'GET' && request.method !== 'HEAD' && origin !== undefined) {
      if (URL.canParse(origin) === false || new URL(origin).host !== request.headers.host) {
        throw new AppError('HOST_REFUSED', `Origin "${origin}" may not change anything here.`, [
          { field: 'Origin', detail: 'not this service', got: origin },
        ]);
      }
    }
    const needsToken = config.token !== null && request.path.startsWith('/api/') && request.path !== '/api/health';
    if (needsToken && request.headers.authorization !== `Bearer ${config.token}`) {
      throw new AppError('TOKEN_NEEDED', 'Authorization: Bearer with the token of this service is needed.');
    }
    next();
  };
}
