import type { ForecastDto, OutlookDto, WhatIf, WhatIfDto } from '@shared/contract/forecast';
import { Refusal } from '@shared/domain/errors';
import type { ForecastFacts } from '@shared/domain/forecast/facts';
import type { Outlook } from '@shared/domain/forecast/forecast';
import { phoneStaffing } from '@shared/domain/forecast/phone-staffing';
import { restsOn } from '@shared/domain/forecast/rests-on';
import { MINUTE_MS, type Instant } from '@shared/domain/instant';
import type { Context } from '../context';
import type { ForecastRequest, ForecastResponse } from '../workers/forecast-client';
import { WorkerError } from '../workers/worker-client';
import { forecastFacts } from './forecast-facts';

/** A forecast this young is told again instead of made again: it looks hours ahead. */
const FRESH_MS = MINUTE_MS;
/** Any number will do; the same one makes the same forecast of the same storm. */
const SEED = 20_314;

/** Looks ahead for whoever asks. A forecast is shared by all who ask within a minute; a question is not. */
export class LookAhead {
  private readonly made = new Map<
    string,
    { readonly at: Instant; readonly forecast: Promise<ForecastDto> }
  >();

  constructor(private readonly context: Context) {}

  /** @throws Refusal `not-found`, `storm-closed`, or `busy` when the thread does not answer */
  forecast(stormId: string): Promise<ForecastDto> {
    const now = this.context.clock();
    const known = this.made.get(stormId);
    if (known && now >= known.at && now - known.at < FRESH_MS) return known.forecast;
    const forecast = this.make(stormId);
    this.made.set(stormId, { at: now, forecast });
    // What failed is not told again.
    forecast.catch(() => this.made.delete(stormId));
    return forecast;
  }

  /**
   * @param signal ends the work when nobody waits for the answer any more
   * @throws Refusal `not-found`, `storm-closed` or `busy`
   */
  async whatIf(stormId: string, change: WhatIf, signal: AbortSignal): Promise<WhatIfDto> {
    const facts = await forecastFacts(this.context, stormId);
    const { asItIs, changed, difference, elapsedMs } = await this.ask(
      { facts, seed: SEED, change },
      signal,
    );
    if (!changed || !difference) throw new Error('a change was asked about and not played');
    return {
      at: facts.now,
      change,
      asItIs: outlookDto(asItIs),
      changed: outlookDto(changed),
      difference,
      elapsedMs,
    };
  }

  private async make(stormId: string): Promise<ForecastDto> {
    const facts = await forecastFacts(this.context, stormId);
    return toDto(facts, await this.ask({ facts, seed: SEED }));
  }

  private async ask(request: ForecastRequest, signal?: AbortSignal): Promise<ForecastResponse> {
    try {
      return await this.context.forecast.run(request, signal ? { signal } : {});
    } catch (error) {
      if (!(error instanceof WorkerError)) throw error;
      if (error.failure !== 'cancelled')
        this.context.log.error({ err: error }, 'the forecast gave no answer');
      throw new Refusal('busy', 'The forecast gave no answer. Ask again in a moment.');
    }
  }
}

const outlookDto = (outlook: Outlook): OutlookDto => ({ ...outlook, curve: [...outlook.curve] });

function toDto(facts: ForecastFacts, { asItIs, phone }: ForecastResponse): ForecastDto {
  const { callsPerHour, handleMinutes } = phone;
  return {
    at: facts.now,
    outlook: outlookDto(asItIs),
    phone: {
      staffNow: facts.phone.staff,
      callsPerHour,
      handleMinutes,
      staffing: [
        ...phoneStaffing(
          callsPerHour.middle,
          callsPerHour.high,
          handleMinutes.middle,
          facts.phone.staff,
        ),
      ],
    },
    restsOn: [...restsOn(facts)],
  };
}
