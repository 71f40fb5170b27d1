import { OFFICE } from '../commands/audit';
import { orderFrom, runCommand } from '../commands/run-command';
import type { Context } from '../context';
import type { LookAhead } from '../forecast/look-ahead';
import type { SomeHandlers } from '../http/bind-routes';
import { measuredVisitsDto } from '../routes/measured-visits';
import { findStorm } from '../storms/storm-queries';
import { measuredSpeeds } from '../storm-roads/measured-speeds';
import { technicianDtos } from '../technicians/technician-rows';
import { auditTrail } from './audit-trail';
import { changeSettings } from './change-settings';
import { drainOf } from './drain';
import { drainCsv } from './drain-csv';
import { readSettings } from './settings';

type Names =
  | 'drain'
  | 'settings'
  | 'changeSettings'
  | 'measuredSpeeds'
  | 'resetMeasuredSpeeds'
  | 'measuredVisits'
  | 'audit'
  | 'officeAudit'
  | 'listTechnicians';

const DEFAULT_BUCKET_MINUTES = 30;

/** What the manager reads and sets. */
export function officeRoutes(context: Context, ahead: LookAhead): SomeHandlers<Names> {
  return {
    drain: async ({ params, query, http: { response } }) => {
      const drain = await drainOf(
        context,
        params.stormId,
        query.bucketMinutes ?? DEFAULT_BUCKET_MINUTES,
      );
      if (query.format !== 'csv') return drain;
      const storm = await findStorm(params.stormId);
      const forecast = storm.state === 'open' ? await ahead.forecast(params.stormId) : null;
      response
        .type('text/csv; charset=utf-8')
        .attachment('backlog-drain.csv')
        // The mark tells spreadsheets that this is UTF-8.
        .send(`\uFEFF${drainCsv(drain, forecast, context.region.dto)}`);
      return undefined;
    },

    settings: () => readSettings(context.sequelize),

    changeSettings: ({ body, person }) =>
      runCommand(context, orderFrom('changeSettings', person, body), (job) =>
        changeSettings(job, body),
      ),

    measuredSpeeds: () => measuredSpeeds(context.sequelize),

    measuredVisits: () => measuredVisitsDto(context.sequelize),

    resetMeasuredSpeeds: ({ body, person }) =>
      runCommand(context, orderFrom('resetMeasuredSpeeds', person, body), (job) =>
        changeSettings(job, { ...body, measuredFrom: job.now }),
      ),

    audit: async ({ params, query }) => {
      await findStorm(params.stormId);
      return { entries: await auditTrail(context.sequelize, params.stormId, query) };
    },

    officeAudit: async ({ query }) => ({
      entries: await auditTrail(context.sequelize, OFFICE, query),
    }),

    listTechnicians: async () => ({
      technicians: await technicianDtos(context.sequelize, 'all'),
    }),
  };
}
