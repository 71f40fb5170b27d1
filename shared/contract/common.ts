import { z } from 'zod';

export const ROLES = ['dispatcher', 'technician', 'manager', 'owner'] as const;
export const Role = z.enum(ROLES);
export type Role = z.infer<typeof Role>;

export const Id = z.uuid();
export type Id = z.infer<typeof Id>;

/** Milliseconds since 1970-01-01T00:00:00Z; bounded so that a typing slip cannot reach the rules. */
export const Moment = z
  .int()
  .min(Date.UTC(2000, 0, 1))
  .max(Date.UTC(2100, 0, 1))
  .meta({ description: 'Milliseconds since 1970-01-01T00:00:00Z' });
export type Moment = z.infer<typeof Moment>;

/** Counts the changes of one row; a write names the version that its writer saw. */
export const Version = z.int().nonnegative();

/** Longitude and latitude in degrees, WGS 84, in GeoJSON's order. */
export const LonLat = z.tuple([z.number().min(-180).max(180), z.number().min(-85).max(85)]);
export type LonLat = z.infer<typeof LonLat>;

/** A telephone number as E.164 writes it. */
export const PhoneNumber = z
  .string()
  .regex(/^\+[1-9]\d{6,14}$/, 'A phone number needs its country code, as in +1 252 555 0142.');

/** One line of text a person typed: no control characters, no blank ends. */
export const line = (most: number) =>
  z
    .string()
    .max(most)
    .transform((text) => text.replace(/[\p{Cc}\p{Zl}\p{Zp}]+/gu, ' ').trim());

/** As `line`, and not empty. */
export const filledLine = (most: number) => line(most).pipe(z.string().min(1));

/** Several lines of text a person typed. */
export const prose = (most: number) =>
  z
    .string()
    .max(most)
    .transform((text) => text.replace(/[^\P{Cc}\n]+/gu, ' ').trim());

export const Cents = z.int().min(0).max(100_000_000);

/**
 * What every change carries: an id made by the client, so that a repeat changes nothing and
 * gets the first answer again.
 */
export const Command = z.strictObject({ commandId: Id });

/** A change of something that the client saw: refused with 409 when it has moved on since. */
export const VersionedCommand = z.strictObject({ commandId: Id, version: Version });
