import type { Context } from '../context';
import type { SomeHandlers } from '../http/bind-routes';

type Names = 'region' | 'feeders' | 'suggestAddresses' | 'nearestAddress';

/** The region in use and its addresses. */
export function regionRoutes({ region }: Context): SomeHandlers<Names> {
  return {
    region: async () => region.dto,
    feeders: async () => region.power,
    suggestAddresses: async ({ query }) => ({ suggestions: region.suggest(query.text, null) }),
    nearestAddress: async ({ query }) => ({ suggestion: region.nearest([query.lon, query.lat]) }),
  };
}
