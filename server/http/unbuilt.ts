import { Refusal } from '@shared/domain/errors';
import type { RouteName } from '@shared/contract/paths';
import type { SomeHandlers } from './bind-routes';

/** Holds the place of routes while they are being written. */
export function unbuilt<K extends RouteName>(...names: K[]): SomeHandlers<K> {
  const handler = () => Promise.reject(new Refusal('busy', 'This part is being written.'));
  return Object.fromEntries(names.map((name) => [name, handler])) as unknown as SomeHandlers<K>;
}
