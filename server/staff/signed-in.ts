import type { Role } from '@shared/contract/common';
import type { Actor } from '../commands/actor';

/** The person behind a session, read afresh for every request. */
export interface SignedIn extends Actor {
  readonly userId: string;
  readonly role: Role;
  readonly mustChangePassword: boolean;
  readonly sessionId: string;
  /** The account's session epoch; a later one voids the session. */
  readonly epoch: number;
}
