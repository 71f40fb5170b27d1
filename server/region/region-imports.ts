import { randomUUID } from 'node:crypto';
import type { BodyOf } from '@shared/contract/http';
import type { RegionImportDto } from '@shared/contract/regions';
import { Refusal } from '@shared/domain/errors';
import { machine, type Actor } from '../commands/actor';
import { orderFrom, runCommand } from '../commands/run-command';
import type { Context } from '../context';
import { change, insert, isDuplicateOf, select } from '../db/sql';
import { OSM_ATTRIBUTION } from './import-region';
import { shownName, type RegionFiles } from './region-files';
import { ImportCancelled, type ImportTask, type RunningImport } from './region-importer';
import type { ImportStep } from './region-making';
import { isTimeZone } from './time-zones';
import { UnreadableRegion } from './unreadable-region';

/** An import that runs is written down this often, in milliseconds. */
const WRITE_EVERY_MS = 1_000;
/** One that has not been heard of for so long was on a server that is gone. */
const SILENT_SECONDS = 30;
const IMPORTER = machine('Region import');

/** Imports of regions: one at a time, whichever server it runs on. */
export class RegionImports {
  private running: { readonly id: string; readonly work: RunningImport } | null = null;
  private ended: Promise<void> = Promise.resolve();

  constructor(
    private readonly context: Context,
    private readonly files: RegionFiles,
  ) {}

  /**
   * Starts an import. It ends by itself, and the region in use stays in use.
   *
   * @throws Refusal `region-busy`, `not-found`, `region-file-refused`
   */
  async start(person: Actor, body: BodyOf<'importRegion'>): Promise<RegionImportDto> {
    if (!isTimeZone(body.timeZone))
      throw new Refusal(
        'region-file-refused',
        `"${body.timeZone}" is no time zone; America/New_York is one.`,
      );
    const task: ImportTask = {
      pbf: await this.files.pathOf(body.extract),
      outFolder: this.context.config.tilesFolder,
      name: body.name,
      timeZone: body.timeZone,
      attribution: OSM_ATTRIBUTION,
      addressFile: body.addresses && {
        path: await this.files.pathOf(body.addresses),
        attribution: body.addressesAttribution,
      },
    };
    await this.endSilent();
    return runCommand(this.context, orderFrom('importRegion', person, body), async (job) => {
      try {
        await insert(
          job.sequelize,
          `INSERT INTO region_imports (id, name, state, started_at, heard_at, user_id)
           VALUES (?, ?, 'running', ?, UTC_TIMESTAMP(3), ?)`,
          [body.importId, body.name, job.at, person.userId],
          job.tx,
        );
      } catch (error) {
        if (isDuplicateOf(error, 'one_import'))
          throw new Refusal(
            'region-busy',
            'A region is being imported already. Wait for it, or stop it.',
          );
        throw error;
      }
      job.note(
        'region',
        body.importId,
        `began to import a region from ${shownName(body.extract.name)}`,
      );
      job.afterCommit(() => this.run(body, task));
      const made = await readImport(this.context, body.importId, job.tx);
      if (!made) throw new Error('the import was not written');
      return made;
    });
  }

  /** @throws Refusal `not-found`, `already-used` when it has ended */
  async cancel(person: Actor, importId: string, commandId: string): Promise<RegionImportDto> {
    const reply = await runCommand(
      this.context,
      orderFrom('cancelRegionImport', person, { commandId, importId }),
      async (job) => {
        const stopped = await change(
          job.sequelize,
          `UPDATE region_imports SET state = 'cancelled', ended_at = ?
            WHERE id = ? AND state = 'running'`,
          [job.at, importId],
          job.tx,
        );
        const now = await readImport(this.context, importId, job.tx);
        if (!now) throw new Refusal('not-found', 'There is no such import.');
        if (stopped === 0) throw new Refusal('already-used', 'The import has ended already.');
        job.note('region', importId, 'stopped the import of a region');
        // One that runs at another server is ended there, when it next writes itself down.
        job.afterCommit(() => {
          if (this.running?.id === importId) this.running.work.cancel();
        });
        return now;
      },
    );
    this.context.live.regionImportProgressed(reply);
    return reply;
  }

  read = (id: string): Promise<RegionImportDto | null> => readImport(this.context, id);

  latest = (): Promise<RegionImportDto | null> => readImport(this.context, null);

  /** Imports of servers that are gone no longer keep others waiting. */
  async endSilent(): Promise<void> {
    await change(
      this.context.sequelize,
      `UPDATE region_imports SET state = 'failed', ended_at = ?, trouble = ?
        WHERE state = 'running' AND heard_at < UTC_TIMESTAMP(3) - INTERVAL ${String(SILENT_SECONDS)} SECOND`,
      [
        new Date(this.context.clock()),
        'The server was stopped while it imported. Nothing of the region in use has changed. Import it again.',
      ],
    );
  }

  async stop(): Promise<void> {
    this.running?.work.cancel();
    await this.ended;
  }

  private run(body: BodyOf<'importRegion'>, task: ImportTask): void {
    const id = body.importId;
    let now: ImportStep = { step: 'reading', share: 0 };
    const work = this.context.regionImporter.start(task, (step) => (now = step));
    this.running = { id, work };
    const write = async (): Promise<void> => {
      const isWanted = await change(
        this.context.sequelize,
        `UPDATE region_imports SET step = ?, share = ?, heard_at = UTC_TIMESTAMP(3)
          WHERE id = ? AND state = 'running'`,
        [now.step, now.share, id],
      );
      if (isWanted === 0) work.cancel();
      else await this.tell(id);
    };
    const warn = (error: unknown): void =>
      this.context.log.warn({ err: error, id }, 'could not write down how an import stands');
    const timer = setInterval(() => void write().catch(warn), WRITE_EVERY_MS);
    this.ended = work.key
      .then(
        (key) => this.end(id, { key }),
        (error: unknown) => this.end(id, { error }),
      )
      .then(async () => {
        if (body.extract.from === 'upload' && (await this.read(id))?.state === 'done')
          for (const file of [body.extract, body.addresses]) if (file) await this.files.drop(file);
      })
      .catch((error: unknown) =>
        this.context.log.error({ err: error, id }, 'could not write down how an import ended'),
      )
      .finally(() => {
        clearInterval(timer);
        if (this.running?.id === id) this.running = null;
      });
  }

  private async end(
    id: string,
    how: { readonly key: string } | { readonly error: unknown },
  ): Promise<void> {
    const isDone = 'key' in how;
    if (
      !isDone &&
      how.error instanceof ImportCancelled &&
      (await this.read(id))?.state === 'cancelled'
    )
      return;
    if (!isDone && !(how.error instanceof UnreadableRegion))
      this.context.log.error({ err: how.error, id }, 'a region could not be imported');
    await runCommand(
      this.context,
      { actor: IMPORTER, type: 'importRegion', commandId: randomUUID(), asked: id },
      async (job) => {
        await change(
          job.sequelize,
          `UPDATE region_imports SET state = ?, share = ?, trouble = ?, region_key = ?, ended_at = ?
            WHERE id = ? AND state = 'running'`,
          [
            isDone ? 'done' : 'failed',
            isDone ? 1 : 0,
            isDone ? null : troubleOf(how.error).slice(0, 600),
            isDone ? how.key : null,
            job.at,
            id,
          ],
          job.tx,
        );
        job.note(
          'region',
          id,
          isDone ? `imported the region ${how.key}` : 'could not import a region',
        );
        return null;
      },
    );
    await this.tell(id);
  }

  private async tell(id: string): Promise<void> {
    const progress = await this.read(id);
    if (progress) this.context.live.regionImportProgressed(progress);
  }
}

function troubleOf(error: unknown): string {
  if (error instanceof UnreadableRegion) return error.message;
  if (error instanceof ImportCancelled)
    return 'The server was stopped while it imported. Import it again.';
  return 'The import failed on our side; the server’s log says where. The region in use is untouched.';
}

interface StoredImport {
  id: string;
  name: string;
  state: RegionImportDto['state'];
  step: string;
  share: number;
  trouble: string | null;
  region_key: string | null;
  started_at: Date;
  ended_at: Date | null;
}

/** One import; without an id the one that runs, or else the last one. */
async function readImport(
  { sequelize }: Context,
  id: string | null,
  tx?: Parameters<typeof select>[3],
): Promise<RegionImportDto | null> {
  const [row] = await select<StoredImport>(
    sequelize,
    `SELECT id, name, state, step, share, trouble, region_key, started_at, ended_at
       FROM region_imports
      ${id === null ? 'ORDER BY is_running DESC, started_at DESC, heard_at DESC LIMIT 1' : 'WHERE id = ?'}`,
    id === null ? [] : [id],
    tx,
  );
  if (!row) return null;
  return {
    id: row.id,
    name: row.name,
    state: row.state,
    step: row.step,
    share: row.share,
    trouble: row.trouble,
    regionKey: row.region_key,
    startedAt: row.started_at.getTime(),
    endedAt: row.ended_at?.getTime() ?? null,
  };
}
