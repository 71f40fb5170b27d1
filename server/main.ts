import path from 'node:path';
import { HOUR_MS } from '@shared/domain/instant';
import { createApp } from './app';
import { EXIT_CONFIG, InvalidConfig, readConfig, type Config } from './config';
import { connect } from './db/connect';
import { migrate } from './db/migrate';
import { tidy } from './db/tidy';
import { seedDemo } from './demo/seed-demo';
import { makeLog } from './log/make-log';
import { createLogReader } from './night-log/log-reader';
import { resumeImports } from './night-log/import-log';
import { machine } from './commands/actor';
import { openRegion } from './region/open-region';
import { readAddressBook } from './region/region-data';
import { regionToStart } from './region/region-to-start';
import { createForecastWorker } from './workers/forecast-client';
import { createPlannerWorker } from './workers/planner-client';
import { createPocketsWorker } from './workers/pockets-client';
import { createRoadsWorker, RoadsClient } from './workers/roads-client';
import { watchRoutes } from './routes/watch-routes';
import { watchRoads } from './storm-roads/watch-roads';
import { startOutbox } from './texts/outbox';
import { poll } from './texts/poll';

/** How long open requests may take to end once the process is told to stop, in milliseconds. */
const DRAIN_MS = 10_000;

void main();

async function main(): Promise<void> {
  const config = configOrExit();
  const log = makeLog(config.logLevel);
  process.on('unhandledRejection', (error) => {
    log.fatal({ err: error }, 'a failure that nobody handled');
    process.exit(1);
  });

  const sequelize = connect(config.database);
  const applied = await migrate(sequelize);
  if (applied.length > 0) log.info({ applied }, 'migrated');

  const imported = await regionToStart(config, sequelize, log);
  if (!imported) {
    log.fatal('There is no region. Import one: npm run region -- import FILE.osm.pbf');
    process.exit(EXIT_CONFIG);
  }

  const planner = createPlannerWorker(path.join(__dirname, 'planner-worker.js'), {
    onCrash: (error) => log.error({ err: error }, 'the planner crashed'),
  });
  const pockets = createPocketsWorker(path.join(__dirname, 'pockets-worker.js'), {
    onCrash: (error) => log.error({ err: error }, 'the pocket maker crashed'),
  });
  const forecast = createForecastWorker(path.join(__dirname, 'forecast-worker.js'), {
    onCrash: (error) => log.error({ err: error }, 'the forecast crashed'),
  });
  const roadsThread = createRoadsWorker(path.join(__dirname, 'roads-worker.js'), {
    onCrash: (error) => log.error({ err: error }, 'the thread of the roads crashed'),
  });
  const roads = new RoadsClient(roadsThread);
  await roads
    .switchTo({ folder: imported.folder, name: imported.manifest.name })
    .catch((error: unknown) =>
      log.error({ err: error }, 'the roads cannot be used; drives are straight lines'),
    );
  const logReader = createLogReader(path.join(__dirname, 'import-worker.js'), {
    onCrash: (error) => log.error({ err: error }, 'the log reader crashed'),
  });
  const outbox = { wake: () => undefined as void };
  const app = await createApp({
    config,
    sequelize,
    log,
    clock: () => Date.now(),
    region: await openRegion(imported),
    planner,
    pockets,
    forecast,
    roads,
    logReader,
    wakeOutbox: () => outbox.wake(),
  });
  if (config.isDemo)
    await seedDemo(app.context, (await readAddressBook(imported.folder)).addresses);
  const worker = startOutbox(app.context);
  outbox.wake = () => worker.wake();

  const roadWatch = watchRoads(app.context);
  const routeWatch = watchRoutes(app.context);

  const tidying = poll(
    async () => {
      const gone = await tidy(sequelize, Date.now());
      if (gone > 0) log.info({ gone }, 'let go of old rows');
    },
    HOUR_MS,
    (error) => log.warn({ err: error }, 'could not tidy up'),
  );

  void resumeImports(app.context, machine('Night log'));

  app.http.on('error', (error: NodeJS.ErrnoException) => {
    log.fatal(
      error.code === 'EADDRINUSE'
        ? `Port ${String(config.http.port)} is taken; choose another with THAWLINE_PORT.`
        : error.message,
    );
    process.exit(1);
  });
  app.http.listen(config.http.port, config.http.host, () =>
    log.info({ address: config.http.publicUrl }, 'serving'),
  );

  let isStopping = false;
  const stop = async (): Promise<void> => {
    if (isStopping) return;
    isStopping = true;
    setTimeout(() => process.exit(1), DRAIN_MS).unref();
    await Promise.all([worker.stop(), roadWatch.stop(), routeWatch.stop(), tidying.stop()]);
    await app.close();
    await Promise.all(
      [planner, pockets, forecast, roadsThread, logReader].map((thread) => thread.close()),
    );
    await sequelize.close();
    process.exit(0);
  };
  process.on('SIGTERM', () => void stop());
  process.on('SIGINT', () => void stop());
}

function configOrExit(): Config {
  try {
    return readConfig(process.env);
  } catch (error) {
    if (!(error instanceof InvalidConfig)) throw error;
    process.stderr.write(`${error.message}\n`);
    process.exit(EXIT_CONFIG);
  }
}
