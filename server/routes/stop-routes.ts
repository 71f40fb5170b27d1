import type { Context } from '../context';
import type { SomeHandlers } from '../http/bind-routes';
import { unbuilt } from '../http/unbuilt';

type Names =
  | 'addStop'
  | 'lockStop'
  | 'moveStop'
  | 'pullStop'
  | 'acceptStop'
  | 'declineStop'
  | 'startTravel'
  | 'tellEta'
  | 'arrive'
  | 'finishStop';

export function stopRoutes(_context: Context): SomeHandlers<Names> {
  return unbuilt(
    'addStop',
    'lockStop',
    'moveStop',
    'pullStop',
    'acceptStop',
    'declineStop',
    'startTravel',
    'tellEta',
    'arrive',
    'finishStop',
  );
}
