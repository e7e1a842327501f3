import path from 'node:path';
import express from 'express';
import type { RequestHandler } from 'express';
import { problem } from './problems.ts';

/**
 * The built client: hashed assets for a year, the page itself never from a cache. Any other address that a
 * browser opens is the page's, which routes by itself.
 */
export function clientFiles(folder: string): RequestHandler[] {
  const files = express.static(folder, {
    index: false,
    redirect: false,
    setHeaders: (res, file) => {
      const hashed = path.relative(folder, file).startsWith(`assets${path.sep}`);
      res.set('Cache-Control', hashed ? 'public, max-age=31536000, immutable' : 'no-cache');
    },
  });
  return [
    files,
    (req, res, next) => {
      const wantsPage = (req.method === 'GET' || req.method === 'HEAD') && req.accepts(['html', 'json']) === 'html';
      if (!wantsPage || path.extname(req.path)) throw problem('not-found');
      res.set('Cache-Control', 'no-cache');
      res.sendFile('index.html', { root: folder, cacheControl: false }, (error) => {
        if (error) next(problem('not-found'));
      });
    },
  ];
}
