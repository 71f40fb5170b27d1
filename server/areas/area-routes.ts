import type { Context } from '../context';
import type { SomeHandlers } from '../http/bind-routes';
import { unbuilt } from '../http/unbuilt';

type Names = 'drawArea' | 'changeArea' | 'removeArea' | 'pockets';

export function areaRoutes(_context: Context): SomeHandlers<Names> {
  return unbuilt('drawArea', 'changeArea', 'removeArea', 'pockets');
}
