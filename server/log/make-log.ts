import { pino, type DestinationStream, type Logger } from 'pino';
import type { Config } from '../config';
import { safeError } from './safe-error';

/** The log: one line of JSON an entry, and nothing of a person in it. */
export const makeLog = (level: Config['logLevel'], to?: DestinationStream): Logger =>
  pino({ level, serializers: { err: safeError } }, to);
