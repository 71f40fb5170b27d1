import { summarisePockets } from '@shared/domain/pockets/pocket-summary';
import { pocketOutline } from './pocket-outline';
import type { PocketsRequest, PocketsResponse } from './pockets-client';
import { serveRequests } from './serve-requests';

function answer({ calls, options }: PocketsRequest): PocketsResponse {
  const began = performance.now();
  const placeOf = new Map(calls.map((call) => [call.id, call.at]));
  const pockets = summarisePockets(calls, options).map((pocket) => ({
    ...pocket,
    outline: pocketOutline(pocket.members.flatMap((id) => [placeOf.get(id)!])),
  }));
  return { pockets, elapsedMs: performance.now() - began };
}

serveRequests(answer);
