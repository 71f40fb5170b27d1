import { z } from 'zod';
import * as areas from './areas';
import { BoardPicture } from './board';
import * as calls from './calls';
import { Command, Id, PhoneNumber, ROLES, type Role } from './common';
import { FeederMap } from './feeders';
import * as ahead from './forecast';
import * as messages from './messages';
import * as nightLogs from './night-logs';
import * as office from './office';
import type { PATHS, RouteName } from './paths';
import * as regions from './regions';
import { RoadLines, RoadLinesQuery } from './road-lines';
import * as routes from './routes';
import * as stormRoads from './storm-roads';

/** Who may use a route. The server checks it in one place, before anything else is read. */
export type Audience = 'anyone' | readonly Role[];

export interface RouteSpec {
  readonly summary: string;
  readonly who: Audience;
  readonly query?: z.ZodType;
  /** `'bytes'`: the body is a file, sent as it is. `'stream'`: as large as the handler allows, and not held. */
  readonly body?: z.ZodType | 'bytes' | 'stream';
  readonly reply: z.ZodType;
  /** What a success answers with; 200 unless said. */
  readonly status?: 200 | 201;
  /** May a user do this who has not yet replaced a password given by the owner? */
  readonly beforePasswordChange?: true;
}

const EVERYONE = ROLES;
const DESK = ['dispatcher', 'manager', 'owner'] as const;
const OFFICE = ['manager', 'owner'] as const;
const OWNER = ['owner'] as const;
const TECHNICIAN = ['technician'] as const;

const Done = z.strictObject({ done: z.literal(true) });
const numberText = (least: number, most: number) =>
  z.string().max(24).pipe(z.coerce.number<string>().min(least).max(most));
const StopChanged = z.strictObject({ stop: routes.StopDto });
const CardChanged = z.strictObject({ card: routes.StopCard });
const AuditPage = z.strictObject({
  entityId: Id.optional(),
  before: numberText(1, 2 ** 50).optional(),
});
const AuditEntries = z.strictObject({ entries: z.array(office.AuditEntryDto) });

/** The whole HTTP contract: types, validation, rights and `/api/openapi.json` come from here. */
export const HTTP = {
  me: {
    summary: 'Who is signed in, or nobody',
    who: 'anyone',
    reply: office.MaybeMe,
    beforePasswordChange: true,
  },
  signIn: { summary: 'Sign in', who: 'anyone', body: office.SignIn, reply: office.Me },
  signOut: { summary: 'Sign out', who: 'anyone', reply: Done, beforePasswordChange: true },
  changePassword: {
    summary: 'Change my password',
    who: EVERYONE,
    body: office.ChangePassword,
    reply: Done,
    beforePasswordChange: true,
  },

  listStorms: {
    summary: 'All storms, newest first',
    who: DESK,
    reply: z.strictObject({ storms: z.array(office.StormDto) }),
  },
  openStorm: {
    summary: 'Open a storm',
    who: OFFICE,
    body: office.OpenStorm,
    reply: office.StormDto,
    status: 201,
  },
  closeStorm: {
    summary: 'Close a storm',
    who: OFFICE,
    body: office.CloseStorm,
    reply: office.StormDto,
  },
  boardPicture: { summary: 'The whole board as of now', who: DESK, reply: BoardPicture },

  takeCall: {
    summary: 'Take a call',
    who: DESK,
    body: calls.TakeCall,
    reply: calls.CallDetail,
    status: 201,
  },
  findHousehold: {
    summary: 'What is known of a phone number',
    who: DESK,
    query: z.strictObject({ phone: PhoneNumber }),
    reply: calls.HouseholdFound,
  },
  readCall: { summary: 'Everything about one call', who: DESK, reply: calls.CallDetail },
  amendCall: {
    summary: 'Correct or add to a call',
    who: DESK,
    body: calls.AmendCall,
    reply: calls.CallDetail,
  },
  addRemark: {
    summary: 'Add a remark',
    who: DESK,
    body: calls.AddRemark,
    reply: calls.CallDetail,
  },
  claimCall: {
    summary: 'Take or keep the claim on a call',
    who: DESK,
    body: Command,
    reply: calls.CallDetail,
  },
  releaseCall: {
    summary: 'Give the claim back',
    who: DESK,
    body: Command,
    reply: calls.CallDetail,
  },
  answerPhoneCheck: {
    summary: 'Save the answers of the phone check',
    who: DESK,
    body: calls.AnswerPhoneCheck,
    reply: calls.CallDetail,
  },
  concludeCall: {
    summary: 'End the phone check: settled, or waiting for a visit',
    who: DESK,
    body: calls.ConcludeCall,
    reply: calls.CallDetail,
  },
  returnToWaiting: {
    summary: 'Put a call whose parts came, or that nobody answered, back in the queue',
    who: DESK,
    body: calls.ReturnToWaiting,
    reply: calls.CallDetail,
  },
  sendMessage: {
    summary: 'Text the customer',
    who: DESK,
    body: messages.SendMessage,
    reply: messages.MessageDto,
    status: 201,
  },
  readMessages: {
    summary: 'Mark the texts of a call as read',
    who: DESK,
    body: messages.ReadMessages,
    reply: calls.CallDetail,
  },

  region: { summary: 'The region in use', who: EVERYONE, reply: areas.RegionDto },
  feeders: { summary: 'The feeders and substations of the region', who: DESK, reply: FeederMap },
  roadLines: {
    summary: 'The way along the roads for some drives; null where none is known',
    who: DESK,
    query: RoadLinesQuery,
    reply: RoadLines,
  },
  feederShape: {
    summary: 'The ground that some feeders serve together',
    who: DESK,
    query: areas.FeederShapeQuery,
    reply: areas.FeederShape,
  },
  listRegions: {
    summary: 'The regions that are kept, and how imports and switches stand',
    who: OWNER,
    reply: regions.Regions,
  },
  uploadRegionFile: {
    summary: 'Send an extract or an address file; nothing is imported yet',
    who: OWNER,
    query: z.strictObject({ fileName: z.string().min(1).max(200) }),
    body: 'stream',
    reply: regions.RegionFile,
    status: 201,
  },
  importRegion: {
    summary: 'Make a region of these files, aside; the one in use stays in use',
    who: OWNER,
    body: regions.ImportRegion,
    reply: regions.RegionImportDto,
    status: 201,
  },
  readRegionImport: {
    summary: 'How far an import is',
    who: OWNER,
    reply: regions.RegionImportDto,
  },
  cancelRegionImport: {
    summary: 'Stop an import; nothing of it stays',
    who: OWNER,
    body: Command,
    reply: regions.RegionImportDto,
  },
  useRegion: {
    summary: 'Switch to a region; the open storm’s calls are located in it',
    who: OWNER,
    body: regions.UseRegion,
    reply: regions.RegionSwitchDto,
  },
  removeRegion: {
    summary: 'Remove a region that is not in use',
    who: OWNER,
    body: regions.RemoveRegion,
    reply: Done,
  },
  unlocatedCalls: {
    summary: 'Calls that a switch could not locate by their address',
    who: OWNER,
    reply: regions.UnlocatedCalls,
  },
  suggestAddresses: {
    summary: 'Addresses that match what was typed',
    who: DESK,
    query: z.strictObject({ text: z.string().min(1).max(160) }),
    reply: z.strictObject({ suggestions: z.array(calls.AddressSuggestion) }),
  },
  nearestAddress: {
    summary: 'The address nearest to a point',
    who: DESK,
    query: z.strictObject({ lon: numberText(-180, 180), lat: numberText(-85, 85) }),
    reply: z.strictObject({ suggestion: calls.AddressSuggestion.nullable() }),
  },

  drawArea: {
    summary: 'Draw an outage area',
    who: DESK,
    body: areas.DrawArea,
    reply: areas.AreaDto,
    status: 201,
  },
  changeArea: {
    summary: 'Change an outage area; the calls inside follow',
    who: DESK,
    body: areas.ChangeArea,
    reply: areas.AreaDto,
  },
  removeArea: {
    summary: 'Remove an outage area',
    who: DESK,
    body: areas.RemoveArea,
    reply: Done,
  },
  pockets: {
    summary: 'Pockets of open calls',
    who: DESK,
    reply: z.strictObject({ pockets: z.array(areas.PocketDto) }),
  },

  roadStretch: {
    summary: 'The road beside a point, or the way between two points',
    who: DESK,
    query: z.strictObject({
      lon: numberText(-180, 180),
      lat: numberText(-85, 85),
      toLon: numberText(-180, 180).optional(),
      toLat: numberText(-85, 85).optional(),
    }),
    reply: stormRoads.RoadStretch,
  },
  addStormRoad: {
    summary: 'Close a road, or say that it is flooded or slow',
    who: DESK,
    body: stormRoads.AddStormRoad,
    reply: stormRoads.StormRoadDto,
    status: 201,
  },
  reportStormRoad: {
    summary: 'Report a road that nobody passes, from where I am',
    who: TECHNICIAN,
    body: stormRoads.ReportStormRoad,
    reply: Done,
    status: 201,
  },
  changeStormRoad: {
    summary: 'Change a storm road; routes and arrival times follow',
    who: DESK,
    body: stormRoads.ChangeStormRoad,
    reply: stormRoads.StormRoadDto,
  },
  confirmStormRoad: {
    summary: 'Confirm a road that a technician reported',
    who: DESK,
    body: stormRoads.ConfirmStormRoad,
    reply: stormRoads.StormRoadDto,
  },
  liftStormRoad: {
    summary: 'Open the road again, or dismiss a report',
    who: DESK,
    body: stormRoads.LiftStormRoad,
    reply: stormRoads.StormRoadDto,
  },
  undoStormRoad: {
    summary: 'Take the latest change of a storm road back',
    who: DESK,
    body: stormRoads.UndoStormRoad,
    reply: stormRoads.StormRoadUndone,
  },

  listTechnicians: {
    summary: 'All technicians, also while no storm is open',
    who: DESK,
    reply: z.strictObject({ technicians: z.array(routes.TechnicianDto) }),
  },
  addTechnician: {
    summary: 'Add a technician',
    who: OFFICE,
    body: routes.AddTechnician,
    reply: routes.TechnicianDto,
    status: 201,
  },
  changeTechnician: {
    summary: 'Change a technician, a shift or a van',
    who: OFFICE,
    body: routes.ChangeTechnician,
    reply: routes.TechnicianDto,
  },

  proposePlan: {
    summary: 'Propose routes',
    who: DESK,
    body: routes.ProposePlan,
    reply: routes.PlanDto,
    status: 201,
  },
  tryPrices: {
    summary: 'Plan with other prices and compare; nothing is kept',
    who: DESK,
    body: routes.TryPrices,
    reply: routes.PlanTrialDto,
  },
  publishPlan: {
    summary: 'Publish proposed routes and offer the next stops',
    who: DESK,
    body: routes.PublishPlan,
    reply: routes.PlanDto,
  },
  discardPlan: {
    summary: 'Discard a proposal',
    who: DESK,
    body: routes.DiscardPlan,
    reply: routes.PlanDto,
  },
  addStop: {
    summary: 'Put a waiting call on a route by hand',
    who: DESK,
    body: routes.AddStop,
    reply: StopChanged,
    status: 201,
  },
  lockStop: {
    summary: 'Lock a stop against the planner, or free it',
    who: DESK,
    body: routes.LockStop,
    reply: StopChanged,
  },
  moveStop: {
    summary: 'Move a stop that is not yet accepted',
    who: DESK,
    body: routes.MoveStop,
    reply: StopChanged,
  },
  pullStop: {
    summary: 'Take a stop off its route',
    who: DESK,
    body: routes.PullStop,
    reply: StopChanged,
  },

  technicianDay: { summary: 'My stops', who: TECHNICIAN, reply: routes.TechnicianDay },
  reportPosition: {
    summary: 'Where I am',
    who: TECHNICIAN,
    body: routes.ReportPosition,
    reply: Done,
  },
  acceptStop: {
    summary: 'Accept the offered stop',
    who: TECHNICIAN,
    body: routes.AcceptStop,
    reply: CardChanged,
  },
  declineStop: {
    summary: 'Decline the offered stop, with a reason',
    who: TECHNICIAN,
    body: routes.DeclineStop,
    reply: CardChanged,
  },
  startTravel: {
    summary: 'Start driving; the customer is told',
    who: TECHNICIAN,
    body: routes.StartTravel,
    reply: CardChanged,
  },
  tellEta: {
    summary: 'Correct the arrival time while driving',
    who: TECHNICIAN,
    body: routes.TellEta,
    reply: CardChanged,
  },
  arrive: { summary: 'Arrived', who: TECHNICIAN, body: routes.Arrive, reply: CardChanged },
  finishStop: {
    summary: 'Finish the visit with an outcome',
    who: TECHNICIAN,
    body: routes.FinishStop,
    reply: CardChanged,
  },

  listMessages: {
    summary: 'Texts of the storm, and those that need a person',
    who: DESK,
    reply: messages.MessageList,
  },
  resolveMessage: {
    summary: 'Decide about a text whose fate is unknown',
    who: DESK,
    body: messages.ResolveMessage,
    reply: messages.MessageDto,
  },

  listNightLogs: {
    summary: 'Night logs of the storm',
    who: DESK,
    reply: z.strictObject({ logs: z.array(nightLogs.NightLogDto) }),
  },
  uploadNightLog: {
    summary: 'Send a night log; nothing is imported yet',
    who: DESK,
    query: z.strictObject({ fileName: z.string().min(1).max(200) }),
    body: 'bytes',
    reply: nightLogs.NightLogPreview,
    status: 201,
  },
  readNightLog: {
    summary: 'One night log and how far its import is',
    who: DESK,
    reply: nightLogs.NightLogDto,
  },
  previewNightLog: {
    summary: 'What these columns would make of the log',
    who: DESK,
    body: nightLogs.PreviewNightLog,
    reply: nightLogs.NightLogPreview,
  },
  importNightLog: {
    summary: 'Import the log with these columns',
    who: DESK,
    body: nightLogs.ImportNightLog,
    reply: nightLogs.NightLogDto,
  },
  listAsides: {
    summary: 'Log rows that wait for a person',
    who: DESK,
    reply: z.strictObject({ rows: z.array(nightLogs.NightLogRowView) }),
  },
  settleNightLogRow: {
    summary: 'Settle a log row that was put aside',
    who: DESK,
    body: nightLogs.SettleNightLogRow,
    reply: nightLogs.NightLogRowView,
  },

  drain: {
    summary: 'The backlog drain',
    who: OFFICE,
    query: z.strictObject({
      bucketMinutes: numberText(5, 1440).optional(),
      format: z.literal('csv').optional(),
    }),
    reply: office.DrainDto,
  },
  forecast: {
    summary: 'When the backlog will be empty and what will be lost, with how sure that is',
    who: OFFICE,
    reply: ahead.ForecastDto,
  },
  whatIf: {
    summary: 'What a change of the crew would do; nothing is changed',
    who: OFFICE,
    body: ahead.WhatIf,
    reply: ahead.WhatIfDto,
  },
  partsAhead: {
    summary: 'What the stops until tomorrow night need against what is on the vans',
    who: OFFICE,
    query: z.strictObject({ format: z.literal('csv').optional() }),
    reply: ahead.PartsAheadDto,
  },
  settings: { summary: 'Settings', who: EVERYONE, reply: office.Settings },
  changeSettings: {
    summary: 'Change settings',
    who: OFFICE,
    body: office.ChangeSettings,
    reply: office.Settings,
  },
  measuredSpeeds: {
    summary: 'What measured drives say of the speeds of roads',
    who: OFFICE,
    reply: office.MeasuredSpeedsDto,
  },
  measuredVisits: {
    summary: 'What finished visits say of the time at a stop',
    who: OFFICE,
    reply: office.MeasuredVisitsDto,
  },
  resetMeasuredSpeeds: {
    summary: 'Forget the drives measured so far; speeds are learned anew',
    who: OFFICE,
    body: office.ResetMeasuredSpeeds,
    reply: office.Settings,
  },
  listUsers: {
    summary: 'Accounts',
    who: OWNER,
    reply: z.strictObject({ users: z.array(office.UserDto) }),
  },
  addUser: {
    summary: 'Make an account; its password is shown once',
    who: OWNER,
    body: office.AddUser,
    reply: office.UserWithPassword,
    status: 201,
  },
  changeUser: {
    summary: 'Change an account',
    who: OWNER,
    body: office.ChangeUser,
    reply: office.UserDto,
  },
  resetPassword: {
    summary: 'Give an account a new password, shown once',
    who: OWNER,
    body: office.ResetPassword,
    reply: office.UserWithPassword,
  },
  audit: {
    summary: 'What anyone did in a storm, newest first',
    who: OFFICE,
    query: AuditPage,
    reply: AuditEntries,
  },
  officeAudit: {
    summary: 'What anyone did outside every storm, such as to accounts, newest first',
    who: OFFICE,
    query: AuditPage,
    reply: AuditEntries,
  },
} as const satisfies Record<RouteName, RouteSpec>;

type Http = typeof HTTP;

/** The path parameters of a route, all ids. */
export type ParamsOf<K extends RouteName> = {
  readonly [P in NamesIn<(typeof PATHS)[K][1]>]: string;
};
type NamesIn<Path extends string> = Path extends `${string}:${infer Rest}`
  ? Rest extends `${infer Name}/${infer Tail}`
    ? Name | NamesIn<Tail>
    : Rest
  : never;

export type BodyOf<K extends RouteName> = Http[K] extends { body: infer B extends z.ZodType }
  ? z.output<B>
  : Http[K] extends { body: 'bytes' }
    ? Uint8Array
    : undefined;
/** What a browser's `Blob` is to the contract, which knows no browser: bytes that are not in memory. */
export interface SentFile {
  readonly size: number;
  readonly type: string;
}
/** The body as a client writes it, before defaults are filled in. */
export type SentBodyOf<K extends RouteName> = Http[K] extends { body: infer B extends z.ZodType }
  ? z.input<B>
  : Http[K] extends { body: 'bytes' }
    ? ArrayBuffer
    : Http[K] extends { body: 'stream' }
      ? SentFile
      : undefined;
export type QueryOf<K extends RouteName> = Http[K] extends { query: infer Q extends z.ZodType }
  ? z.output<Q>
  : undefined;
export type SentQueryOf<K extends RouteName> = Http[K] extends { query: infer Q extends z.ZodType }
  ? z.input<Q>
  : undefined;
export type ReplyOf<K extends RouteName> = z.output<Http[K]['reply']>;
