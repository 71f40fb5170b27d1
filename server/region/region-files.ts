import { randomUUID } from 'node:crypto';
import { mkdir, open, readdir, realpath, rename, rm, stat } from 'node:fs/promises';
import { basename, join, sep } from 'node:path';
import type { Readable } from 'node:stream';
import type { RegionFile } from '@shared/contract/regions';
import { Refusal } from '@shared/domain/errors';
import type { Config } from '../config';
import { inWords, isDiskFull } from './disk-trouble';

/** What an owner sent is kept this long, for another try with other settings. */
const KEPT_MS = 24 * 3_600_000;
/** Sent files that may lie here at once; the oldest make room. */
const MOST_UPLOADS = 6;

const UPLOAD = /^([0-9a-f-]{36})~(.+)$/;

type Folders = Pick<Config, 'dataFolder' | 'regionFilesFolder' | 'mostRegionUploadBytes'>;

/** Files for imports: those that an owner has sent, and those that lie in the server's folder for them. */
export class RegionFiles {
  private readonly uploads: string;

  constructor(private readonly config: Folders) {
    this.uploads = join(config.dataFolder, 'region-uploads');
  }

  /**
   * Writes what comes in to the disk as it comes; a file that is cut off or too large leaves nothing.
   *
   * @throws Refusal `region-file-refused`, `no-room`
   */
  async take(content: Readable, fileName: string, announcedBytes: number): Promise<RegionFile> {
    const most = this.config.mostRegionUploadBytes;
    if (announcedBytes > most) throw tooLarge(most);
    await mkdir(this.uploads, { recursive: true });
    const name = `${randomUUID()}~${safeName(fileName)}`;
    const part = join(this.uploads, `.${name}.part`);
    let bytes = 0;
    try {
      const file = await open(part, 'wx', 0o600);
      try {
        // The request is left alive when it is refused: its sender is to read why.
        for await (const chunk of content.iterator({
          destroyOnReturn: false,
        }) as AsyncIterable<Buffer>) {
          bytes += chunk.length;
          if (bytes > most) throw tooLarge(most);
          await file.writeFile(chunk);
        }
      } finally {
        await file.close();
      }
      if (bytes === 0) throw new Refusal('region-file-refused', 'The file is empty.');
      if (announcedBytes >= 0 && bytes !== announcedBytes) throw cutOff();
      await rename(part, join(this.uploads, name));
    } catch (error) {
      await rm(part, { force: true });
      if (isDiskFull(error)) throw new Refusal('no-room', (inWords(error) as Error).message);
      throw content.errored ? cutOff() : error;
    }
    await this.tidy();
    return { name, from: 'upload', bytes };
  }

  /** What may be imported, newest first. */
  async list(): Promise<RegionFile[]> {
    const found = await Promise.all([
      filesIn(this.uploads, 'upload'),
      filesIn(this.config.regionFilesFolder, 'folder'),
    ]);
    return found
      .flat()
      .sort((a, b) => b.changedMs - a.changedMs)
      .map(({ changedMs: _, ...file }) => file);
  }

  /**
   * The path of a file from the list. A name that leads out of its folder, also by a link, is none.
   *
   * @throws Refusal `not-found`
   */
  async pathOf({ name, from }: Pick<RegionFile, 'name' | 'from'>): Promise<string> {
    const folder = from === 'upload' ? this.uploads : this.config.regionFilesFolder;
    const gone = new Refusal('not-found', `The file ${shownName(name)} is not there any more.`);
    if (name !== basename(name) || name.startsWith('.')) throw gone;
    const [path, home] = await Promise.all([
      realpath(join(folder, name)).catch(() => null),
      realpath(folder).catch(() => null),
    ]);
    if (path === null || home === null || !path.startsWith(home + sep)) throw gone;
    if (!(await stat(path)).isFile()) throw gone;
    return path;
  }

  /** Removes what was sent and is no longer needed: after an import, or after a day. */
  async drop({ name, from }: Pick<RegionFile, 'name' | 'from'>): Promise<void> {
    if (from === 'upload' && UPLOAD.test(name)) await rm(join(this.uploads, name), { force: true });
  }

  async tidy(): Promise<void> {
    const files = (await filesIn(this.uploads, 'upload')).sort((a, b) => b.changedMs - a.changedMs);
    const old = Date.now() - KEPT_MS;
    for (const [i, file] of files.entries())
      if (i >= MOST_UPLOADS || file.changedMs < old) await this.drop(file);
    for (const entry of await readdir(this.uploads).catch(() => [])) {
      if (!entry.endsWith('.part')) continue;
      const part = join(this.uploads, entry);
      const found = await stat(part).catch(() => null);
      // Nothing is written to it any more: the server that took it is gone.
      if (found && found.mtimeMs < Date.now() - 600_000) await rm(part, { force: true });
    }
  }
}

/** The name that the owner's file had. */
export const shownName = (name: string): string => UPLOAD.exec(name)?.[2] ?? name;

async function filesIn(
  folder: string,
  from: RegionFile['from'],
): Promise<(RegionFile & { readonly changedMs: number })[]> {
  // A folder that nobody has made yet holds nothing.
  const entries = await readdir(folder, { withFileTypes: true }).catch(() => []);
  const files = await Promise.all(
    entries
      .filter((entry) => entry.isFile() && !entry.name.startsWith('.'))
      .filter(({ name }) => (from === 'upload' ? UPLOAD : IMPORTABLE).test(name))
      .map(async ({ name }) => {
        const found = await stat(join(folder, name)).catch(() => null);
        return found ? [{ name, from, bytes: found.size, changedMs: found.mtimeMs }] : [];
      }),
  );
  return files.flat();
}

/** The folder may hold other things; these may be extracts or addresses. */
const IMPORTABLE = /\.(pbf|osm|csv|tsv|txt|geojson|geojsonl|geojsons|ndjson|json)$/i;

function safeName(fileName: string): string {
  const name = basename(fileName.replace(/\\/g, '/'))
    .normalize('NFKC')
    .replace(/[^\p{L}\p{N}._ -]+/gu, '_')
    .replace(/^[.\s]+/, '');
  return (name === '' ? 'file' : name).slice(-100);
}

const cutOff = (): Refusal =>
  new Refusal('region-file-refused', 'The file was cut off on its way. Send it again.');

const tooLarge = (most: number): Refusal =>
  new Refusal(
    'region-file-refused',
    `The file is larger than ${String(Math.round(most / 1e6))} MB. Cut the extract down to the counties that you serve, lay it into the server's folder for such files, or have THAWLINE_REGION_UPLOAD_MB raised.`,
  );
