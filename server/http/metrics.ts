import type { Request, RequestHandler, Response } from 'express';
import { collectDefaultMetrics, Gauge, Histogram, Registry } from 'prom-client';
import type { Sequelize } from 'sequelize';
import { select } from '../db/sql';

/** Figures for a monitoring system, in its text format. No label holds anything of a person. */
export function metrics(sequelize: Sequelize): {
  readonly countRequests: RequestHandler;
  readonly show: RequestHandler;
} {
  const registry = new Registry();
  collectDefaultMetrics({ register: registry });
  const seconds = new Histogram({
    name: 'thawline_http_seconds',
    help: 'Time to answer, by method, route and status',
    labelNames: ['method', 'route', 'status'] as const,
    buckets: [0.005, 0.015, 0.05, 0.15, 0.5, 1.5, 5],
    registers: [registry],
  });
  new Gauge({
    name: 'thawline_outbox_waiting',
    help: 'Texts that wait to be sent',
    registers: [registry],
    async collect() {
      this.set(await count(sequelize, "state IN ('new', 'sending')"));
    },
  });
  new Gauge({
    name: 'thawline_outbox_unknown',
    help: 'Texts whose fate is unknown and that wait for a person',
    registers: [registry],
    async collect() {
      this.set(await count(sequelize, "state = 'unknown'"));
    },
  });

  return {
    countRequests: (request, response, next) => {
      const stop = seconds.startTimer();
      response.on('finish', () =>
        stop({
          method: request.method,
          route: routeOf(request),
          status: String(response.statusCode),
        }),
      );
      next();
    },
    show: async (request: Request, response: Response) => {
      // Figures are for the machine next door, not for the world.
      if (!isLoopback(request.socket.remoteAddress)) {
        response.status(404).end();
        return;
      }
      response.type(registry.contentType).send(await registry.metrics());
    },
  };
}

async function count(sequelize: Sequelize, condition: string): Promise<number> {
  const [row] = await select<{ n: number }>(
    sequelize,
    `SELECT COUNT(*) AS n FROM messages WHERE ${condition}`,
  );
  return Number(row?.n ?? 0);
}

/** The route's pattern; an id in a label would make a new series for every call. */
function routeOf(request: Request): string {
  const route = request.route as { path?: unknown } | undefined;
  return typeof route?.path === 'string' ? route.path : 'other';
}

const isLoopback = (address: string | undefined): boolean =>
  address !== undefined && /^(::1|(::ffff:)?127\.)/.test(address);
