export type ProblemCode =
  | 'not-found'
  | 'not-signed-in'
  | 'not-allowed'
  | 'sign-in-failed'
  | 'too-many-attempts'
  | 'password-change-needed'
  | 'password-refused'
  | 'foreign-origin'
  | 'command-id-reused'
  | 'stale-version'
  | 'illegal-transition'
  | 'household-has-open-call'
  | 'claimed-by-another'
  | 'not-claimed'
  | 'call-not-open'
  | 'already-on-a-route'
  | 'technician-busy'
  | 'stop-is-firm'
  | 'skill-missing'
  | 'plan-overtaken'
  | 'storm-closed'
  | 'storm-already-open'
  | 'times-disagree'
  | 'outline-crosses-itself'
  | 'storm-road-unfit'
  | 'nothing-to-undo'
  | 'opted-out'
  | 'no-phone'
  | 'log-not-readable'
  | 'log-busy'
  | 'region-file-refused'
  | 'region-busy'
  | 'no-room'
  | 'already-used'
  | 'busy';

/** A rule of the business said no, in a sentence that its reader can act on. */
export class Refusal extends Error {
  constructor(
    readonly code: ProblemCode,
    message: string,
    /** The row as it is now, for whoever acted on an older one. */
    readonly current?: unknown,
  ) {
    super(message);
    this.name = 'Refusal';
  }
}
