import express, { Router } from 'express';

/**
 * Serves the regions' tiles: `/<region>-<hash>/{z}/{x}/{y}.pbf` and `/<region>-<hash>/addr/…`.
 *
 * The hash in the path lets browsers keep tiles for good. A tile that does not exist is empty ground,
 * not an error: the map library would try to decode an error page.
 */
export function tileRoutes(folder: string): Router {
  const routes = Router();
  const TILE = /^\/[a-z0-9-]+\/(addr\/)?\d{1,2}\/\d{1,7}\/\d{1,7}\.pbf$/;
  routes.use((req, res, next) => {
    if (req.method !== 'GET' && req.method !== 'HEAD') {
      res.set('Allow', 'GET, HEAD').status(405).end();
      return;
    }
    // Only tiles leave this folder; address books and manifests do not.
    if (TILE.test(req.path)) next();
    else res.status(404).end();
  });
  routes.use(
    express.static(folder, {
      immutable: true,
      maxAge: '1y',
      index: false,
      redirect: false,
      // One whole answer for each tile, which a service worker can keep.
      acceptRanges: false,
      setHeaders: (res) => {
        res.setHeader('Content-Encoding', 'gzip');
        res.setHeader('Content-Type', 'application/x-protobuf');
      },
    }),
  );
  routes.use((_req, res) => {
    res.set('Cache-Control', 'public, max-age=86400').status(204).end();
  });
  return routes;
}
