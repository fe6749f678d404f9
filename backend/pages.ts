import { readFileSync } from 'node:fs';
import { join } from 'node:path';
import express, { Router, type Request, type RequestHandler } from 'express';
import { nonceOf } from './security';

/** The build puts a hash of the content into these names, so what they hold never changes. */
const HASHED = /-[A-Z0-9]{8}\.(?:js|css)$/;
const YEAR = 'public, max-age=31536000, immutable';
const DAY = 'public, max-age=86400';

/**
 * Serves the built front end. An address that is no file gets the application, which has its own page for what does not exist;
 * a file that is absent is not found, so that a missing script never comes as a page.
 *
 * @param folder of the built front end
 */
export function pageRoutes(folder: string): Router {
  // Angular's builder repeats the place on each script and style of its own.
  const pieces = readFileSync(join(folder, 'index.html'), 'utf8').split('CSP_NONCE');
  if (pieces.length < 2) throw new Error('index.html has no place for the nonce: <sw-root ngCspNonce="CSP_NONCE">');
  const page: RequestHandler = (_req, res) => {
    res.setHeader('Cache-Control', 'no-cache');
    res.type('html').send(pieces.join(nonceOf(res)));
  };
  const files = express.static(folder, {
    index: false,
    redirect: false,
    cacheControl: false,
    setHeaders: (res, path) => res.setHeader('Cache-Control', HASHED.test(path) ? YEAR : DAY),
  });
  return Router()
    .get('/index.html', page)
    .use(files)
    .get('/{*path}', (req, res, next) => {
      if (wantsPage(req)) page(req, res, next);
      else next();
    });
}

/** A browser says that it takes pages; a program that takes anything gets one where no file can be meant. */
function wantsPage(req: Request): boolean {
  const accepts = req.get('accept') ?? '*/*';
  return accepts.includes('text/html') || (accepts.includes('*/*') && !/\.[^/]*$/.test(req.path));
}
