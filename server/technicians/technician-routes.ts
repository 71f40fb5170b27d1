import type { Context } from '../context';
import type { SomeHandlers } from '../http/bind-routes';
import { unbuilt } from '../http/unbuilt';

type Names = 'addTechnician' | 'changeTechnician' | 'technicianDay' | 'reportPosition';

export function technicianRoutes(_context: Context): SomeHandlers<Names> {
  return unbuilt('addTechnician', 'changeTechnician', 'technicianDay', 'reportPosition');
}
