import { z } from 'zod';
import type { ProblemCode } from '../domain/errors';

/** A refusal, as RFC 9457 (Problem Details for HTTP APIs, IETF, 2023) writes it. */
export const Problem = z.looseObject({
  type: z.string(),
  title: z.string(),
  status: z.int(),
  detail: z.string().optional(),
  instance: z.string().optional(),
  /** What was wrong with the request, field by field (JSON pointers, RFC 6901). */
  errors: z.array(z.strictObject({ pointer: z.string(), detail: z.string() })).optional(),
  /** With `stale-version` and its like: the row as it is now. */
  current: z.unknown().optional(),
});
export type Problem = z.infer<typeof Problem>;

export const problemType = (code: ProblemCode): string => `/problems/${code}`;
