import { createServer, type IncomingMessage, type Server } from 'node:http';
import path from 'node:path';
import compression from 'compression';
import express, { type Request, type RequestHandler } from 'express';
import { pinoHttp } from 'pino-http';
import { areaRoutes } from './areas/area-routes';
import { PocketWatch } from './areas/pocket-watch';
import { callRoutes } from './calls/call-routes';
import type { Context } from './context';
import { forecastRoutes } from './forecast/forecast-routes';
import { LookAhead } from './forecast/look-ahead';
import { bindRoutes, type Handlers } from './http/bind-routes';
import { RateLimit } from './http/rate-limit';
import { healthRoutes } from './http/health';
import { metrics } from './http/metrics';
import { openApi } from './http/openapi';
import { problemHandler } from './http/problem';
import { ownOrigins, refuseForeignChanges, securityHeaders } from './http/security';
import { sessions } from './http/sessions';
import { safeError } from './log/safe-error';
import { nightLogRoutes } from './night-log/night-log-routes';
import { officeRoutes } from './office/office-routes';
import { RegionHolder, type RegionInUse } from './region/region-in-use';
import { createRegionImporter, type RegionImporterPort } from './region/region-importer';
import { Regions } from './region/regions';
import { regionRoutes } from './region/region-routes';
import { tileRoutes } from './region/serve-tiles';
import { planRoutes } from './routes/plan-routes';
import { stopRoutes } from './routes/stop-routes';
import { serveSockets } from './realtime/sockets';
import type { Live } from './realtime/live';
import { personOf, signInDesk } from './staff/person';
import { staffRoutes } from './staff/staff-routes';
import { stormRoadRoutes } from './storm-roads/storm-road-routes';
import { stormRoutes } from './storms/storm-routes';
import { technicianRoutes } from './technicians/technician-routes';
import { messageRoutes } from './texts/message-routes';
import { textWebhooks } from './texts/text-webhooks';

export interface App {
  readonly http: Server;
  /** The context with its live door open. */
  readonly context: Context;
  readonly regions: Regions;
  close(): Promise<void>;
}

/** The context before its live door is open, with the region that is in use at the start. */
export interface GivenContext extends Omit<Context, 'live' | 'region' | 'regionImporter'> {
  readonly region: RegionInUse;
  /** Left out: imports run in a process of their own. */
  readonly regionImporter?: RegionImporterPort;
  /** Left out: counts by the minutes of this process. */
  readonly rateLimit?: RateLimit;
}

/** Puts the whole server together. Nothing listens yet. */
export async function createApp(given: GivenContext): Promise<App> {
  const app = express();
  const http = createServer(app);
  const session = sessions(given.config, given.sequelize);
  const desk = signInDesk();
  const isOwnOrigin = ownOrigins(given.config);
  const signIn: RequestHandler[] = [session, ...desk.middlewares];
  const measured = metrics(given.sequelize);

  // Routes are made with the context, and the context's live door needs the HTTP server first.
  const live = await serveSockets({
    http,
    sequelize: given.sequelize,
    log: given.log,
    middlewares: signIn,
    personOf: (request: IncomingMessage) => personOf(request),
    isOwnOrigin,
    onBoardChange: (stormId, change) => {
      if (change.kind === 'calls') watch.callsChanged(stormId);
    },
  });
  const context: Context = {
    ...given,
    live,
    region: new RegionHolder(given.region),
    regionImporter:
      given.regionImporter ?? createRegionImporter(path.join(__dirname, 'import-program.js')),
  };
  const watch = new PocketWatch(context);
  const regions = new Regions(context);
  const ahead = new LookAhead(context);

  app.set('trust proxy', given.config.http.trustProxyHops);
  app.disable('x-powered-by');
  app.use(requestLog(context));
  app.use(securityHeaders(context.config));
  app.use(measured.countRequests);
  app.use(healthRoutes(context));
  app.get('/metrics', measured.show);
  app.use('/tiles', tileRoutes(context.config.tilesFolder));
  app.use(compression());
  app.use('/webhooks/texts', textWebhooks(context));

  app.get('/api/openapi.json', (_request, response) => {
    response.json(openApi(context.config.http.publicUrl));
  });
  app.use('/api', (_request, response, next) => {
    response.set('Cache-Control', 'no-store');
    next();
  });
  app.use('/api', ...signIn, refuseForeignChanges(context.config, isOwnOrigin));
  const handlers: Handlers = {
    ...staffRoutes(context, desk),
    ...stormRoutes(context),
    ...callRoutes(context),
    ...regionRoutes(context, regions),
    ...areaRoutes(context),
    ...stormRoadRoutes(context),
    ...technicianRoutes(context),
    ...planRoutes(context),
    ...stopRoutes(context),
    ...messageRoutes(context),
    ...nightLogRoutes(context),
    ...officeRoutes(context, ahead),
    ...forecastRoutes(context, ahead),
  };
  const limit = given.rateLimit ?? new RateLimit();
  app.use(bindRoutes(context, handlers, (request: Request) => personOf(request), limit));
  app.use('/api', (_request, response) => {
    response
      .status(404)
      .type('application/problem+json')
      .send(JSON.stringify({ type: 'about:blank', status: 404, title: 'Not found' }));
  });
  app.use(client(context.config.clientFolder));
  app.use(problemHandler(context.log));

  return {
    http,
    context,
    regions,
    close: async () => {
      watch.stop();
      await regions.stop();
      return closeAll(http, live, session);
    },
  };
}

/** The built pages: hashed files may be kept for a year, the first page never. */
function client(folder: string): express.Router {
  const router = express.Router();
  router.use(
    express.static(folder, {
      index: false,
      setHeaders: (response, file) => {
        const isHashed = /-[A-Z0-9]{8}\.\w+$/.test(path.basename(file));
        response.set(
          'Cache-Control',
          isHashed ? 'public, max-age=31536000, immutable' : 'no-cache',
        );
      },
    }),
  );
  // Every address of the application is one page; a file that is missing is not.
  router.get('/{*path}', (request, response, next) => {
    if (path.extname(request.path) !== '') return next();
    response.set('Cache-Control', 'no-cache');
    response.sendFile(path.join(folder, 'index.html'), (error) => {
      if (error) next(error);
    });
  });
  router.use((_request, response) => {
    response.status(404).type('text/plain').send('Not found');
  });
  return router;
}

/** One line a request, without query strings, bodies, cookies or addresses of people. */
function requestLog(context: Context): RequestHandler {
  return pinoHttp({
    logger: context.log,
    autoLogging: {
      ignore: (request) => /^\/(tiles|healthz|readyz|metrics)/.test(request.url ?? ''),
    },
    wrapSerializers: false,
    serializers: {
      req: (request: Request) => ({
        id: request.id,
        method: request.method,
        path: request.originalUrl.split('?')[0],
      }),
      res: (response: { statusCode: number }) => ({ status: response.statusCode }),
      err: safeError,
    },
    customLogLevel: (_request, response, error) =>
      error || response.statusCode >= 500 ? 'error' : 'debug',
  });
}

async function closeAll(http: Server, live: Live, session: { stop(): void }): Promise<void> {
  session.stop();
  await live.close();
  http.closeAllConnections();
  await new Promise<void>((resolve) => {
    // Closing a server that never listened is an error that means nothing here.
    http.close(() => resolve());
  });
}
