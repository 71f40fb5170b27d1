import type { Context } from '../context';
import type { SomeHandlers } from '../http/bind-routes';
import { unbuilt } from '../http/unbuilt';

type Names = 'sendMessage' | 'readMessages' | 'listMessages' | 'resolveMessage';

export function messageRoutes(_context: Context): SomeHandlers<Names> {
  return unbuilt('sendMessage', 'readMessages', 'listMessages', 'resolveMessage');
}
