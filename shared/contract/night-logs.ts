import { z } from 'zod';
import { COLUMN_ROLES } from '../domain/night-log/column-map';
import { Command, Id, line, Moment } from './common';

export const ColumnGuess = z.strictObject({
  index: z.int().nonnegative(),
  header: z.string(),
  role: z.enum(COLUMN_ROLES),
  /** 0 to 1. */
  confidence: z.number(),
  why: z.string(),
  samples: z.array(z.string()),
});
export type ColumnGuess = z.infer<typeof ColumnGuess>;

/** One row as the preview shows it: what would become of it. */
export const NightLogRowView = z.strictObject({
  id: Id.nullable(),
  /** The log that the row is of: a storm may have several, and each counts its own lines. */
  logId: Id,
  line: z.int(),
  outcome: z.enum(['call', 'folded', 'aside', 'empty', 'known', 'settled']),
  /** Why it is put aside or what it was folded into, in words. */
  reason: z.string(),
  cells: z.array(z.string()),
  name: z.string(),
  phone: z.string(),
  address: z.string(),
  units: z.string(),
  receivedAt: Moment.nullable(),
  callId: Id.nullable(),
});
export type NightLogRowView = z.infer<typeof NightLogRowView>;

export const NightLogDto = z.strictObject({
  id: Id,
  stormId: Id,
  fileName: z.string(),
  state: z.enum(['read', 'importing', 'imported', 'failed']),
  uploadedAt: Moment,
  uploadedBy: z.string(),
  encoding: z.string(),
  rowCount: z.int(),
  doneCount: z.int(),
  counts: z.strictObject({
    calls: z.int(),
    folded: z.int(),
    aside: z.int(),
    empty: z.int(),
    known: z.int(),
  }),
  columns: z.array(ColumnGuess),
  /** What went wrong, in words. */
  trouble: z.string().nullable(),
});
export type NightLogDto = z.infer<typeof NightLogDto>;

export const NightLogPreview = z.strictObject({
  /** Its counts are what an import with these columns would come to. */
  log: NightLogDto,
  /** The first rows, and every row that would be put aside, up to a limit. */
  rows: z.array(NightLogRowView),
});
export type NightLogPreview = z.infer<typeof NightLogPreview>;

const ColumnMap = z.array(z.enum(COLUMN_ROLES)).max(80);
export const PreviewNightLog = z.strictObject({ columns: ColumnMap });
export const ImportNightLog = Command.extend({ columns: ColumnMap });

/** A person's word on a row that was put aside. */
export const SettleNightLogRow = Command.extend({
  /** The call taken from it, or `null` when there is nothing to do. */
  callId: Id.nullable(),
  note: line(300),
});
