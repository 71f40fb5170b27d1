import { forecast } from '@shared/domain/forecast/forecast';
import type { ForecastRequest, ForecastResponse } from './forecast-client';
import { serveRequests, type Running } from './serve-requests';

function answer(
  { facts, seed, change }: ForecastRequest,
  { shouldStop }: Running,
): ForecastResponse {
  const began = performance.now();
  const made = forecast(facts, { seed, shouldStop, ...(change ? { change } : {}) });
  return { ...made, elapsedMs: performance.now() - began };
}

serveRequests(answer);
