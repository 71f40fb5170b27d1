import type { Context } from '../context';
import type { SomeHandlers } from '../http/bind-routes';
import type { LookAhead } from './look-ahead';
import { partsAhead } from './parts-ahead';
import { partsCsv } from './parts-csv';

type Names = 'forecast' | 'whatIf' | 'partsAhead';

/** What lies ahead of the open storm: when it is empty, what a change of the crew does, what to load. */
export function forecastRoutes(context: Context, ahead: LookAhead): SomeHandlers<Names> {
  return {
    forecast: ({ params }) => ahead.forecast(params.stormId),

    whatIf: ({ params, body, http: { response } }) => {
      const gone = new AbortController();
      // Whoever closes the line no longer waits; the thread is free for the next question.
      response.once('close', () => gone.abort());
      return ahead.whatIf(params.stormId, body, gone.signal);
    },

    partsAhead: async ({ params, query, http: { response } }) => {
      const parts = await partsAhead(context, params.stormId);
      if (query.format !== 'csv') return parts;
      response
        .type('text/csv; charset=utf-8')
        .attachment('parts-to-load.csv')
        // The mark tells spreadsheets that this is UTF-8.
        .send(`\uFEFF${partsCsv(parts, context.region.dto.timeZone)}`);
      return undefined;
    },
  };
}
