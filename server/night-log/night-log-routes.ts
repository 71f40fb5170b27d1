import type { Context } from '../context';
import type { SomeHandlers } from '../http/bind-routes';
import { unbuilt } from '../http/unbuilt';

type Names =
  | 'listNightLogs'
  | 'uploadNightLog'
  | 'readNightLog'
  | 'previewNightLog'
  | 'importNightLog'
  | 'listAsides'
  | 'settleNightLogRow';

export function nightLogRoutes(_context: Context): SomeHandlers<Names> {
  return unbuilt(
    'listNightLogs',
    'uploadNightLog',
    'readNightLog',
    'previewNightLog',
    'importNightLog',
    'listAsides',
    'settleNightLogRow',
  );
}
