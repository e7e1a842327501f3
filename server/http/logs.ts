import { randomUUID } from 'node:crypto';
import type { RequestHandler } from 'express';
import { pino } from 'pino';
import type { DestinationStream, Logger } from 'pino';

declare module 'express-serve-static-core' {
  interface Request {
    id: string;
    /** Logs with the request's id. */
    log: Logger;
  }
}

/** JSON lines; nothing that names a person or opens a door is written. */
export function makeLogger(level: string, destination?: DestinationStream): Logger {
  return pino({ level, base: undefined, timestamp: pino.stdTimeFunctions.isoTime }, destination);
}

const SAFE = new Set(['GET', 'HEAD', 'OPTIONS']);

/**
 * Gives each request an id, which the answer carries, and logs it when it is over: failures of ours as
 * errors, what changes something as info, the rest for those who debug. The path is logged without its query; headers,
 * bodies and network addresses are not.
 */
export function requestLog(logger: Logger): RequestHandler {
  return (req, res, next) => {
    const id = (req.id = randomUUID());
    const started = performance.now();
    const { method, path } = req;
    let log: Logger | undefined;
    Object.defineProperty(req, 'log', { get: () => (log ??= logger.child({ request: id })) });
    res.setHeader('X-Request-Id', id);
    res.on('close', () => {
      const level = res.statusCode >= 500 ? 'error' : SAFE.has(method) ? 'debug' : 'info';
      if (!logger.isLevelEnabled(level)) return;
      const ms = Math.round(performance.now() - started);
      req.log[level](
        { method, path, status: res.statusCode, ms, ...(!res.writableFinished && { cut: true }) },
        'request',
      );
    });
    next();
  };
}
