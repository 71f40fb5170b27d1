import { orderFrom, runCommand } from '../commands/run-command';
import type { Context } from '../context';
import type { SomeHandlers } from '../http/bind-routes';
import { addTechnician, changeTechnician } from './manage-technicians';
import { reportPosition } from './report-position';
import { technicianDay } from './technician-day';

type Names = 'addTechnician' | 'changeTechnician' | 'technicianDay' | 'reportPosition';

/** Technicians: who they are and when they work, and what their own phone asks. */
export function technicianRoutes(context: Context): SomeHandlers<Names> {
  return {
    addTechnician: ({ body, person }) =>
      runCommand(context, orderFrom('addTechnician', person, body), (job) =>
        addTechnician(job, body),
      ),

    changeTechnician: ({ params, body, person }) =>
      runCommand(context, orderFrom('changeTechnician', person, { ...body, ...params }), (job) =>
        changeTechnician(job, params.technicianId, body),
      ),

    technicianDay: ({ person }) => technicianDay(context, person.technicianId),

    reportPosition: async ({ body, person }) => {
      await reportPosition(context, person.technicianId, body.position);
      return { done: true };
    },
  };
}
