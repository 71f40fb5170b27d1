import { Router } from 'express';
import type { Context } from '../context';
import { select } from '../db/sql';

/** `/healthz`: the process answers. `/readyz`: and the database does too. */
export function healthRoutes({ sequelize }: Pick<Context, 'sequelize'>): Router {
  const router = Router();
  router.get('/healthz', (_request, response) => {
    response.type('text/plain').send('ok');
  });
  router.get('/readyz', async (_request, response) => {
    try {
      await select(sequelize, 'SELECT 1 AS one');
      response.type('text/plain').send('ready');
    } catch {
      // Whatever ails the database, the answer to the balancer is the same.
      response.status(503).set('Retry-After', '2').type('text/plain').send('no database');
    }
  });
  return router;
}
