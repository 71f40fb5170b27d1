import path from 'node:path';

import { z } from 'zod';

/** What the server is told from outside. Every variable is described in the table of docker/README.md. */
export interface Config {
  readonly environment: Environment;
  readonly logLevel: LogLevel;
  readonly http: {
    readonly host: string;
    readonly port: number;
    /** Where people reach the product, without a slash at the end; links in texts and signed webhooks use it. */
    readonly publicUrl: string;
    /** How many reverse proxies stand in front; their X-Forwarded-* is believed, no further. */
    readonly trustProxyHops: number;
  };
  readonly database: {
    readonly host: string;
    readonly port: number;
    readonly user: string;
    readonly password: string;
    readonly name: string;
  };
  /** Signs session cookies and the customers' links. */
  readonly sessionSecret: string;
  readonly texts: {
    readonly account: string;
    readonly token: string;
    /** Where the text service answers; null for the service itself, an address for the local fake. */
    readonly baseUrl: string | null;
    /** The number that texts come from, E.164. */
    readonly from: string;
  };
  /** Absolute folder of what the server writes: demo sign-ins, uploads. */
  readonly dataFolder: string;
  /** Absolute folder of the region's map tiles. */
  readonly tilesFolder: string;
  /** Absolute folder where a person may lay files for the import of a region. */
  readonly regionFilesFolder: string;
  /** Largest file that an owner may send for the import of a region, in bytes. */
  readonly mostRegionUploadBytes: number;
  /** Absolute folder of the built client. */
  readonly clientFolder: string;
  /** IANA name of the zone in which the region's people read times. */
  readonly regionZone: string;
  /** Three digits that complete a phone number of seven. */
  readonly defaultAreaCode: string;
  /** Whether an empty database is filled with the demo county, its people and an open storm. */
  readonly isDemo: boolean;
}

const ENVIRONMENTS = ['production', 'development', 'test'] as const;
const LOG_LEVELS = ['fatal', 'error', 'warn', 'info', 'debug', 'trace', 'silent'] as const;
export type Environment = (typeof ENVIRONMENTS)[number];
export type LogLevel = (typeof LOG_LEVELS)[number];

/** sysexits.h: EX_CONFIG. A supervisor sees that starting again will not help. */
export const EXIT_CONFIG = 78;

/** The environment is not fit to start with. The message names each wrong variable and never shows a value. */
export class InvalidConfig extends Error {}

/**
 * Reads the configuration from the environment's THAWLINE_* variables. An empty variable counts as not set.
 *
 * @throws InvalidConfig with one sentence that names every wrong or missing variable
 */
export function readConfig(env: Readonly<Record<string, string | undefined>>): Config {
  const set = Object.fromEntries(
    Object.keys(Variables.shape).map((name) => [name, env[name]?.trim() || undefined]),
  );
  const result = Variables.safeParse(set);
  if (!result.success) throw new InvalidConfig(sentenceFor(result.error.issues, set));

  const read = result.data;
  return {
    environment: read.THAWLINE_ENVIRONMENT,
    logLevel: read.THAWLINE_LOG_LEVEL,
    http: {
      host: read.THAWLINE_HOST,
      port: read.THAWLINE_PORT,
      publicUrl: read.THAWLINE_PUBLIC_URL,
      trustProxyHops: read.THAWLINE_TRUST_PROXY_HOPS,
    },
    database: {
      host: read.THAWLINE_DB_HOST,
      port: read.THAWLINE_DB_PORT,
      user: read.THAWLINE_DB_USER,
      password: read.THAWLINE_DB_PASSWORD,
      name: read.THAWLINE_DB_NAME,
    },
    sessionSecret: read.THAWLINE_SESSION_SECRET,
    texts: {
      account: read.THAWLINE_TEXT_ACCOUNT,
      token: read.THAWLINE_TEXT_TOKEN,
      baseUrl: read.THAWLINE_TEXT_BASE_URL ?? null,
      from: read.THAWLINE_TEXT_FROM,
    },
    dataFolder: path.resolve(read.THAWLINE_DATA_FOLDER),
    tilesFolder: path.resolve(read.THAWLINE_TILES_FOLDER),
    regionFilesFolder: path.resolve(
      read.THAWLINE_REGION_FILES_FOLDER ?? path.join(read.THAWLINE_DATA_FOLDER, 'region-files'),
    ),
    mostRegionUploadBytes: read.THAWLINE_REGION_UPLOAD_MB * 1e6,
    clientFolder: path.resolve(read.THAWLINE_CLIENT_FOLDER),
    regionZone: read.THAWLINE_REGION_ZONE,
    defaultAreaCode: read.THAWLINE_AREA_CODE,
    isDemo: read.THAWLINE_DEMO === 'on',
  };
}

/** A whole number of plain digits; `Number` alone would take '', '0x10' and '1e3'. */
const wholeNumber = (min: number, max: number) =>
  z
    .string()
    .regex(/^\d{1,9}$/, `must be a whole number from ${min} to ${max}`)
    .transform(Number)
    .refine((n) => n >= min && n <= max, `must be a whole number from ${min} to ${max}`);

/** Words that stand in example files until somebody puts a real secret in their place. */
const PLACEHOLDER =
  /change[-_ ]?me|example|placeholder|replace|secret|password|your[-_ ]|xxxx|<|>/i;

const secret = (minLength: number) =>
  z
    .string()
    .min(minLength, `must have ${minLength} characters or more`)
    .refine((text) => !PLACEHOLDER.test(text), 'still holds a placeholder')
    .refine((text) => new Set(text).size >= 8, 'is too regular to be a secret');

const address = z
  .url({ protocol: /^https?$/, error: 'must be an http or https address' })
  .transform((text) => text.replace(/\/+$/, ''));

const LOOPBACK = new Set(['localhost', '127.0.0.1', '[::1]']);
const isLoopback = (url: string): boolean => LOOPBACK.has(new URL(url).hostname);

const Variables = z
  .object({
    THAWLINE_ENVIRONMENT: z
      .enum(ENVIRONMENTS, { error: oneOf(ENVIRONMENTS) })
      .default('production'),
    THAWLINE_LOG_LEVEL: z.enum(LOG_LEVELS, { error: oneOf(LOG_LEVELS) }).default('info'),
    THAWLINE_HOST: z.string().default('127.0.0.1'),
    THAWLINE_PORT: wholeNumber(1, 65_535).default(4310),
    THAWLINE_PUBLIC_URL: address.default('http://localhost:4310'),
    THAWLINE_TRUST_PROXY_HOPS: wholeNumber(0, 5).default(0),
    THAWLINE_DB_HOST: z.string().default('127.0.0.1'),
    THAWLINE_DB_PORT: wholeNumber(1, 65_535).default(3316),
    THAWLINE_DB_USER: z.string().default('thawline'),
    THAWLINE_DB_PASSWORD: secret(12),
    THAWLINE_DB_NAME: z
      .string()
      .regex(/^[A-Za-z0-9_]{1,64}$/, 'must be letters, digits and underscores')
      .default('thawline'),
    THAWLINE_SESSION_SECRET: secret(32),
    THAWLINE_TEXT_ACCOUNT: z.string().regex(/^AC[0-9a-f]{32}$/, 'must be AC and 32 hex digits'),
    THAWLINE_TEXT_TOKEN: secret(16),
    THAWLINE_TEXT_BASE_URL: address.optional(),
    THAWLINE_TEXT_FROM: z
      .string()
      .regex(/^\+[1-9]\d{6,14}$/, 'must be a phone number in E.164 form, such as +12015550100'),
    THAWLINE_DATA_FOLDER: z.string().default('.data'),
    THAWLINE_TILES_FOLDER: z.string().default('tiles'),
    THAWLINE_REGION_FILES_FOLDER: z.string().optional(),
    THAWLINE_REGION_UPLOAD_MB: wholeNumber(1, 100_000).default(2000),
    THAWLINE_CLIENT_FOLDER: z.string().default('dist/client'),
    THAWLINE_REGION_ZONE: z
      .string()
      .refine(isZone, 'must be an IANA time zone, such as America/New_York')
      .default('America/New_York'),
    THAWLINE_AREA_CODE: z
      .string()
      .regex(/^[2-9]\d{2}$/, 'must be three digits, the first from 2 to 9')
      .default('252'),
    THAWLINE_DEMO: z.enum(['on', 'off'], { error: oneOf(['on', 'off']) }).default('off'),
  })
  .superRefine((read, context) => {
    // Passwords and customers' addresses must not cross a network in the clear.
    if (read.THAWLINE_ENVIRONMENT !== 'production') return;
    if (read.THAWLINE_PUBLIC_URL.startsWith('https:') || isLoopback(read.THAWLINE_PUBLIC_URL))
      return;
    context.addIssue({
      code: 'custom',
      path: ['THAWLINE_PUBLIC_URL'],
      message:
        'must be an https address unless it is this machine (or set THAWLINE_ENVIRONMENT=development)',
    });
  });

function oneOf(values: readonly string[]): string {
  return `must be one of ${values.join(', ')}`;
}

function isZone(name: string): boolean {
  try {
    new Intl.DateTimeFormat('en', { timeZone: name });
    // Intl also takes fixed offsets such as +01:00, which know no summer time.
    return /^[A-Za-z]/.test(name);
  } catch {
    // RangeError: no such zone.
    return false;
  }
}

function sentenceFor(
  issues: readonly z.core.$ZodIssue[],
  set: Readonly<Record<string, string | undefined>>,
): string {
  const faults = new Map<string, string>();
  for (const issue of issues) {
    const name = String(issue.path[0]);
    // One fault a variable is enough to act on.
    if (!faults.has(name)) faults.set(name, set[name] === undefined ? 'is not set' : issue.message);
  }
  const list = [...faults].map(([name, fault]) => `${name} ${fault}`).join('; ');
  return `The configuration is not fit to start with: ${list}.`;
}
