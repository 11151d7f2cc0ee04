import { createServer } from 'node:http';
import { fileURLToPath } from 'node:url';
import type express from 'express';
import { pino } from 'pino';
import { openStore } from '../db/open.ts';
import { sweepBlobs } from '../db/sweep.ts';
import { Shop } from './api/shop.ts';
import { createApp } from './app.ts';
import { builtClient } from './clientPages.ts';
import { readConfig } from './config.ts';
import { seedDemo } from './demo.ts';
import { Pool } from './jobs/pool.ts';

/** Serves the REST service and the client on one port. `--dev` builds the client on the fly instead of from .build. */
async function main(): Promise<void> {
  const config = readConfig(process.env);
  const log = pino({ level: config.logLevel });
  const pool = new Pool();
  const store = openStore(config.dataDir);
  const shop = new Shop(store, config.dataDir, pool, (error) => log.error({ err: error }, 'job failed'));
  const swept = sweepBlobs(store, shop.blobs);
  if (swept.removed > 0) log.info(swept, 'removed files that nothing refers to');
  const app = createApp(shop, config, log, process.argv.includes('--dev') ? await devClient() : builtClient());
  const server = createServer(app);
  server.listen(config.port, config.host, async () => {
    const address = server.address();
    const port = typeof address === 'object' && address !== null ? address.port : config.port;
    log.info(`Sidelong is at http://${config.host}:${port}/`);
    shop.runner.start();
    if (config.demo) await seedDemo(shop);
  });

  let stopping = false;
  const stop = async () => {
    if (stopping) return;
    stopping = true;
    log.info('stopping');
    server.closeAllConnections();
    server.close();
    await shop.runner.stop();
    await pool.close();
    store.close();
    process.exit(0);
  };
  process.on('SIGTERM', stop);
  process.on('SIGINT', stop);
}

async function devClient(): Promise<express.RequestHandler> {
  const { createServer: createVite } = await import('vite');
  const vite = await createVite({
    configFile: fileURLToPath(new URL('../client/vite.config.ts', import.meta.url)),
    server: { middlewareMode: true },
    appType: 'spa',
  });
  return vite.middlewares;
}

await main();
