import type { Context } from '../context';
import type { SomeHandlers } from '../http/bind-routes';
import { unbuilt } from '../http/unbuilt';

type Names = 'drain' | 'settings' | 'changeSettings' | 'audit';

export function officeRoutes(_context: Context): SomeHandlers<Names> {
  return unbuilt('drain', 'settings', 'changeSettings', 'audit');
}
