import { createServer } from 'node:http';
import { createApp } from './app.ts';
import { prepared } from './prepare.ts';

/** How long open requests may take to end after a signal. */
const DRAIN_MS = 9000;

/** How long a large log may take to arrive over a slow line; headers keep their own, short limit. */
const UPLOAD_MS = 60 * 60 * 1000;

const { deps, failed } = await prepared('web');
const { config, db, logger } = deps;
const server = createServer(await createApp(deps));

server.requestTimeout = UPLOAD_MS;
server.on('error', (error) => failed(error));
server.listen(config.port, config.host, () => {
  const address = server.address();
  logger.info({ address }, 'the web process listens');
});

let draining = false;
for (const signal of ['SIGTERM', 'SIGINT'] as const)
  process.on(signal, () => {
    if (draining) return;
    draining = true;
    logger.info({ signal }, 'the web process drains');
    server.closeIdleConnections();
    const cut = setTimeout(() => server.closeAllConnections(), DRAIN_MS);
    server.close(() => {
      clearTimeout(cut);
      void db.close().finally(() => process.exit(0));
    });
  });
