import type { Instant } from './instant';

/** What the automatic mode did last, as far as people are told of it. */
export interface AutomaticDone {
  readonly planId: string;
  readonly at: Instant;
  /** "a call came in or changed". */
  readonly because: string;
  /** What the change gains by the weights that are set. */
  readonly gainCents: number;
  /** Stops that it moved. */
  readonly moved: number;
}

/** What a published plan tells of the automatic mode; `null` when a person published it. */
export function automaticDoneOf(plan: {
  readonly id: string;
  readonly proposedAt: Instant;
  readonly automatic?: { readonly because: string } | undefined;
  readonly gainCents?: number | undefined;
  readonly figures: { readonly moved: number };
}): AutomaticDone | null {
  const { id, proposedAt, automatic, gainCents = 0, figures } = plan;
  if (!automatic) return null;
  return {
    planId: id,
    at: proposedAt,
    because: automatic.because,
    gainCents,
    moved: figures.moved,
  };
}
