import { createHash } from 'node:crypto';
import path from 'node:path';
import { fileURLToPath } from 'node:url';

/** The checkout. Every script works from here, whatever folder it is started in. */
export const root = path.resolve(path.dirname(fileURLToPath(import.meta.url)), '..', '..');

/** The project's own folder for databases, secrets and logs; ignored by git. */
export const dataFolder = path.resolve(root, process.env.THAWLINE_DATA_FOLDER || '.data');

/** A path as a person would type it from the checkout. */
export const shown = (file) => path.relative(root, file) || '.';

/** A short name that differs between two checkouts on one machine. */
export const shortName = (text) => createHash('sha256').update(text).digest('hex').slice(0, 10);
