import type { Role } from '@shared/contract/common';

export interface Destination {
  readonly path: string;
  readonly name: string;
  /** The second key after `g`. */
  readonly key: string;
  readonly who: readonly Role[];
}

const DESK: readonly Role[] = ['dispatcher', 'manager', 'owner'];
const OFFICE: readonly Role[] = ['manager', 'owner'];

/** The screens of the desk, in the order of a night's work. A technician has one screen only. */
export const DESTINATIONS: readonly Destination[] = [
  { path: '/board', name: 'Board', key: 'b', who: DESK },
  { path: '/routes', name: 'Routes', key: 'r', who: DESK },
  { path: '/messages', name: 'Messages', key: 't', who: DESK },
  { path: '/night-logs', name: 'Night logs', key: 'l', who: DESK },
  { path: '/drain', name: 'Drain', key: 'd', who: OFFICE },
  { path: '/office', name: 'Office', key: 'o', who: OFFICE },
];
