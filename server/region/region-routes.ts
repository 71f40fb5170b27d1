import { Refusal } from '@shared/domain/errors';
import { OpenAreas } from '../areas/open-areas';
import type { Context } from '../context';
import type { SomeHandlers } from '../http/bind-routes';
import type { Regions } from './regions';

type Names =
  | 'region'
  | 'feeders'
  | 'suggestAddresses'
  | 'nearestAddress'
  | 'listRegions'
  | 'uploadRegionFile'
  | 'importRegion'
  | 'readRegionImport'
  | 'cancelRegionImport'
  | 'useRegion'
  | 'removeRegion'
  | 'unlocatedCalls';

/** The region in use and its addresses; for the owner, the other regions too. */
export function regionRoutes(
  { region, sequelize }: Context,
  regions: Regions,
): SomeHandlers<Names> {
  const areas = new OpenAreas(sequelize);
  return {
    region: async () => region.dto,
    feeders: async () => region.power,
    suggestAddresses: async ({ query }) => ({
      suggestions: region.suggest(query.text, await areas.nearness()),
    }),
    nearestAddress: async ({ query }) => ({ suggestion: region.nearest([query.lon, query.lat]) }),

    listRegions: () => regions.list(),
    uploadRegionFile: async ({ query, http: { request, response } }) => {
      const length = Number(request.headers['content-length'] ?? -1);
      try {
        return await regions.files.take(request, query.fileName, length);
      } catch (error) {
        // What is still on its way is let through, or the sender would never read the refusal.
        response.set('Connection', 'close');
        request.resume();
        throw error;
      }
    },
    importRegion: ({ body, person }) => regions.imports.start(person, body),
    readRegionImport: async ({ params }) => {
      const found = await regions.imports.read(params.importId);
      if (!found) throw new Refusal('not-found', 'There is no such import.');
      return found;
    },
    cancelRegionImport: ({ params, body, person }) =>
      regions.imports.cancel(person, params.importId, body.commandId),
    useRegion: ({ body, person }) => regions.use(person, body),
    removeRegion: ({ body, person }) => regions.remove(person, body),
    unlocatedCalls: ({ params }) => regions.unlocated(params.switchId),
  };
}
