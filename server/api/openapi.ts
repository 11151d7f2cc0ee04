import type { ZodOpenApiPathsObject } from 'zod-openapi';
import { createDocument } from 'zod-openapi';
import { problemSchema } from './problem.ts';
import type { Route } from './routes.ts';

/** OpenAPI 3.1 of the calls, from the very schemas that check them. */
export function openApiDocument(routes: readonly Route[]): object {
  const paths: Record<string, Record<string, unknown>> = {};
  for (const route of routes) {
    const parameters = [...route.path.matchAll(/\{(\w+)\}/g)].map(([, name]) => ({
      name,
      in: 'path',
      required: true,
      schema: { type: 'string' },
    }));
    const content =
      route.answer === undefined
        ? route.answerType === undefined
          ? undefined
          : { [route.answerType]: { schema: { type: 'string' } } }
        : { 'application/json': { schema: route.answer } };
    const status = String(content === undefined ? 204 : (route.status ?? 200));
    paths[route.path] ??= {};
    paths[route.path][route.method] = {
      tags: [route.tag],
      summary: route.summary,
      ...(parameters.length > 0 ? { parameters } : {}),
      ...(route.query === undefined ? {} : { requestParams: { query: route.query } }),
      ...(route.body === undefined
        ? route.rawBody === undefined
          ? {}
          : { requestBody: { content: { [route.rawBody]: { schema: { type: 'string' } } } } }
        : { requestBody: { content: { 'application/json': { schema: route.body } } } }),
      responses: {
        [status]: { description: route.summary, ...(content === undefined ? {} : { content }) },
        default: { description: 'A problem', content: { 'application/problem+json': { schema: problemSchema } } },
      },
    };
  }
  return createDocument({
    openapi: '3.1.0',
    info: {
      title: 'Sidelong',
      version: '1',
      description:
        'Radiation dose for spacecraft at Uranus and Neptune. A preliminary planning aid: the environment specification of the project and agency standards take precedence.',
    },
    paths: paths as ZodOpenApiPathsObject,
  });
}

/** A readable page of the same, that loads nothing from anywhere. */
export function documentationPage(routes: readonly Route[]): string {
  const escaped = (text: string) => text.replaceAll('&', '&amp;').replaceAll('<', '&lt;');
  const tags = [...new Set(routes.map((route) => route.tag))];
  const sections = tags.map((tag) => {
    const rows = routes
      .filter((route) => route.tag === tag)
      .map(
        (route) =>
          `<tr><td><code>${route.method.toUpperCase()}</code></td><td><code>${escaped(route.path)}</code></td><td>${escaped(route.summary)}</td></tr>`,
      );
    return `<h2>${escaped(tag)}</h2><table><thead><tr><th>Method</th><th>Path</th><th>What it does</th></tr></thead><tbody>${rows.join('')}</tbody></table>`;
  });
  return `<!doctype html><html lang="en"><head><meta charset="utf-8"><title>Sidelong: calls</title><link rel="stylesheet" href="/api/docs.css"></head><body><main><h1>Calls of the service</h1><p>Schemas of every body and answer: <a href="/api/openapi.json">OpenAPI 3.1</a>. Refusals are RFC 9457 problems; <a href="/api/problems">all of them</a>.</p>${sections.join('')}</main></body></html>`;
}

export const DOCUMENTATION_CSS =
  'body{font:16px/1.5 system-ui,sans-serif;margin:0;color:#1b2530;background:#fff}main{max-width:70rem;margin:2rem auto;padding:0 1rem}table{border-collapse:collapse;width:100%}td,th{text-align:left;padding:.3rem .6rem;border-bottom:1px solid #ccd3da}';
