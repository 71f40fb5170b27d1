import type { Role } from '@shared/contract/common';

/** Who does something: a signed-in person, or a part of the machine by name. */
export interface Actor {
  readonly userId: string | null;
  readonly name: string;
  readonly role: Role | 'machine';
  readonly technicianId: string | null;
}

export const machine = (name: string): Actor => ({
  userId: null,
  name,
  role: 'machine',
  technicianId: null,
});
