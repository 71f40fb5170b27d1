import { z } from 'zod';
import { Command, filledLine, Id, line, Moment } from './common';

/** Names a region's folder: its name in small letters, and a hash of what it was made from. */
export const RegionKey = z.string().regex(/^[a-z0-9-]{3,160}$/);

const Count = z.int().nonnegative();

export const RegionReportDto = z.strictObject({
  seconds: z.number(),
  /** Largest memory of the importing process, in 10^6 bytes. */
  peakMegabytes: z.number(),
  steps: z.array(z.strictObject({ step: z.string(), seconds: z.number() })).readonly(),
  leftOut: z.array(z.strictObject({ what: z.string(), count: Count, why: z.string() })).readonly(),
  addressFile: z
    .strictObject({
      rows: Count,
      added: Count,
      merged: Count,
      unitRows: Count,
      citiesFilled: Count,
      rejectedCount: Count,
      reasons: z.record(z.string(), Count),
      /** The first of them. */
      rejected: z.array(z.strictObject({ line: Count, reason: z.string() })).readonly(),
    })
    .nullable(),
});
export type RegionReportDto = z.infer<typeof RegionReportDto>;

export const KeptRegion = z.strictObject({
  key: RegionKey,
  name: z.string(),
  timeZone: z.string(),
  attribution: z.string(),
  isInUse: z.boolean(),
  /** An earlier version of the importer made it, and this one cannot read it: import it again. */
  isOutdated: z.boolean(),
  counts: z.strictObject({
    addresses: Count,
    streets: Count,
    places: Count,
    tiles: Count,
    roadKm: z.number(),
    /** Of its tiles, in bytes. */
    bytes: Count,
  }),
  report: RegionReportDto.nullable(),
});
export type KeptRegion = z.infer<typeof KeptRegion>;

/** A file that may be imported: sent by the owner, or laid into the server's folder for it. */
export const RegionFile = z.strictObject({
  name: z.string(),
  from: z.enum(['upload', 'folder']),
  bytes: Count,
});
export type RegionFile = z.infer<typeof RegionFile>;

const FileChoice = z.strictObject({
  name: filledLine(255),
  from: z.enum(['upload', 'folder']),
});

export const ImportRegion = Command.extend({
  importId: Id,
  name: filledLine(80),
  timeZone: filledLine(60),
  extract: FileChoice,
  addresses: FileChoice.nullable(),
  /** How the source of the address file wants to be named; empty when it asks for nothing. */
  addressesAttribution: line(160),
});
export type ImportRegion = z.infer<typeof ImportRegion>;

export const RegionImportDto = z.strictObject({
  id: Id,
  name: z.string(),
  state: z.enum(['running', 'done', 'failed', 'cancelled']),
  step: z.string(),
  /** 0 to 1. */
  share: z.number(),
  /** What went wrong and what to do about it. */
  trouble: z.string().nullable(),
  regionKey: RegionKey.nullable(),
  startedAt: Moment,
  endedAt: Moment.nullable(),
});
export type RegionImportDto = z.infer<typeof RegionImportDto>;

export const RegionSwitchDto = z.strictObject({
  id: Id,
  toKey: RegionKey,
  toName: z.string(),
  state: z.enum(['locating', 'done']),
  /** Calls of the open storm, and how many of them have been looked at. */
  total: Count,
  done: Count,
  /** Found by their address in the new region. */
  located: Count,
  /** Put back where they stood when this region was last in use. */
  returned: Count,
  /** Not found by their address, but their place lies within the region: left where they are. */
  kept: Count,
  /** Not found, and their place is in no part of this region. */
  outside: Count,
  at: Moment,
});
export type RegionSwitchDto = z.infer<typeof RegionSwitchDto>;

export const SwitchCall = z.strictObject({
  callId: Id,
  number: z.int().positive(),
  address: z.string(),
  outcome: z.enum(['kept', 'outside']),
});
export type SwitchCall = z.infer<typeof SwitchCall>;

export const Regions = z.strictObject({
  regions: z.array(KeptRegion),
  /** The import that runs, or else the last one. */
  latestImport: RegionImportDto.nullable(),
  latestSwitch: RegionSwitchDto.nullable(),
  files: z.array(RegionFile),
  /** Where on the server a person may lay files. */
  filesFolder: z.string(),
  mostUploadBytes: Count,
  /** What stands outside of the region in use, by name. */
  techniciansOutside: z.array(z.string()),
  areasOutside: z.array(z.string()),
});
export type Regions = z.infer<typeof Regions>;

export const UseRegion = Command.extend({ key: RegionKey });
export const RemoveRegion = Command.extend({ key: RegionKey });
export const UnlocatedCalls = z.strictObject({
  change: RegionSwitchDto,
  calls: z.array(SwitchCall),
});
