import express from 'express';
import type { Express } from 'express';
import helmet from 'helmet';
import { accountRoutes } from './accounts/accounts.routes.ts';
import { dayRoutes } from './days/days.routes.ts';
import type { Deps } from './deps.ts';
import { clientFiles } from './http/client.ts';
import { notFound, problemHandler } from './http/errors.ts';
import { requestLog } from './http/logs.ts';
import { routerOf } from './http/router.ts';
import { callers, isSecure, makePassport, signingSecret } from './http/session.ts';
import { systemRoutes } from './http/system.routes.ts';
import { logRoutes } from './logs/logs.routes.ts';
import { grantRoutes } from './properties/grants.routes.ts';
import { propertyRoutes } from './properties/properties.routes.ts';
import { readingRoutes } from './readings/readings.routes.ts';

/**
 * The web application: never listens, never exits. The whole order of what a request passes is here; what a
 * single route passes after that is in http/router.ts.
 */
export async function createApp(deps: Deps): Promise<Express> {
  const { config, db, logger } = deps;
  const passport = makePassport(deps);
  const features = [
    ...accountRoutes(passport),
    ...propertyRoutes,
    ...grantRoutes,
    ...logRoutes,
    ...dayRoutes,
    ...readingRoutes,
  ];
  const routes = [...features, ...systemRoutes(features)];

  const app = express();
  app.disable('x-powered-by');
  app.disable('etag');
  app.set('trust proxy', config.trustProxy);

  app.use(requestLog(logger));
  app.use(helmet(headers(isSecure(deps))));
  app.use('/api', (_req, res, next) => {
    res.set('Cache-Control', 'no-store');
    next();
  });
  app.use('/api', ...callers(deps, passport, await signingSecret(db)));
  app.use(routerOf(deps, routes));
  app.use('/api', notFound);
  app.use(...clientFiles(config.clientFolder));
  app.use(problemHandler);
  return app;
}

/** Nothing from another host, no script in a page; style attributes are the component library's. */
function headers(secure: boolean): Parameters<typeof helmet>[0] {
  return {
    contentSecurityPolicy: {
      useDefaults: false,
      directives: {
        'default-src': [`'self'`],
        'script-src': [`'self'`],
        'style-src': [`'self'`, `'unsafe-inline'`],
        'img-src': [`'self'`, 'data:'],
        'font-src': [`'self'`, 'data:'],
        'object-src': [`'none'`],
        'base-uri': [`'none'`],
        'form-action': [`'self'`],
        'frame-ancestors': [`'none'`],
      },
    },
    strictTransportSecurity: secure ? { maxAge: 31_536_000 } : false,
    referrerPolicy: { policy: 'same-origin' },
    xFrameOptions: { action: 'deny' },
  };
}
