import { randomUUID } from 'node:crypto';
import type { RequestHandler } from 'express';
import { pino } from 'pino';
import type { DestinationStream, Logger } from 'pino';
import { pinoHttp } from 'pino-http';

/** JSON lines; nothing that names a person or opens a door is written. */
export function makeLogger(level: string, destination?: DestinationStream): Logger {
  return pino({ level, base: undefined, timestamp: pino.stdTimeFunctions.isoTime }, destination);
}

/**
 * Gives each request an id, which the answer carries, and logs it with its outcome. The path is logged
 * without its query; headers, bodies and network addresses are not.
 */
export function requestLog(logger: Logger): RequestHandler {
  return pinoHttp({
    logger,
    genReqId: (_req, res) => {
      const id = randomUUID();
      res.setHeader('X-Request-Id', id);
      return id;
    },
    serializers: {
      req: ({ id, method, url }: { id: string; method: string; url: string }) => ({
        id,
        method,
        path: url.split('?', 1)[0],
      }),
      res: ({ statusCode }: { statusCode: number }) => ({ status: statusCode }),
    },
    customLogLevel: (_req, res, error) => (error || res.statusCode >= 500 ? 'error' : 'debug'),
  });
}
