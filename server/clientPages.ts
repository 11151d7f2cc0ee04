import { existsSync } from 'node:fs';
import { join } from 'node:path';
import { fileURLToPath } from 'node:url';
import express from 'express';

/** Where `npm run build` puts the client. */
export const BUILT_CLIENT = fileURLToPath(new URL('../.build/client/', import.meta.url));

/** Serves the built client; every path that is no file is a page of it. */
export function builtClient(): express.RequestHandler {
  const router = express.Router();
  router.use(express.static(BUILT_CLIENT, { index: false, maxAge: '1h', immutable: true }));
  router.get(['/', '/*path'], (_request, response) => {
    if (!existsSync(join(BUILT_CLIENT, 'index.html'))) {
      response.status(503).type('text').send('The client is not built; run npm start, or npm run build.');
      return;
    }
    // As a root, since a path through a folder that begins with a dot would be refused.
    response.setHeader('Cache-Control', 'no-cache');
    response.sendFile('index.html', { root: BUILT_CLIENT, cacheControl: false });
  });
  return router;
}
