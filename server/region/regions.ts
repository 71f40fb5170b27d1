import { join } from 'node:path';
import type { BodyOf, ReplyOf } from '@shared/contract/http';
import type { KeptRegion, RegionSwitchDto } from '@shared/contract/regions';
import { Refusal } from '@shared/domain/errors';
import { AreaRecord } from '../areas/area-record';
import type { Actor } from '../commands/actor';
import { orderFrom, runCommand } from '../commands/run-command';
import type { Context } from '../context';
import { select } from '../db/sql';
import { openStorm } from '../storms/storm-queries';
import { TechnicianRecord } from '../technicians/technician-record';
import { poll, type Poll } from '../texts/poll';
import { listRegions } from './demo-region';
import type { ImportedRegion } from './import-region';
import { isWithin } from './is-within';
import { openRegion } from './open-region';
import { readReport, type RegionCounts } from './region-data';
import { RegionFiles } from './region-files';
import { findRegion, isReadable, keyOf, removeRegionFolder } from './region-folder';
import { RegionImports } from './region-imports';
import type { RegionInUse } from './region-in-use';
import { relocateCalls } from './relocate-calls';
import { findSwitch, regionInUse, switchRegion } from './switch-region';

/** How long until a server notices what another, or the command line, has switched to. */
const LOOK_MS = 2_000;

/** The regions that are kept, which one is in use, and what makes and changes them. */
export class Regions {
  readonly files: RegionFiles;
  readonly imports: RegionImports;
  private readonly watch: Poll;
  private readonly locating = new Map<string, Promise<void>>();
  /** A region that the database names and that cannot be opened here; said once. */
  private unopened: string | null = null;

  constructor(private readonly context: Context) {
    this.files = new RegionFiles(context.config);
    this.imports = new RegionImports(context, this.files);
    this.watch = poll(
      () => this.look(),
      LOOK_MS,
      (error) => context.log.warn({ err: error }, 'could not look which region is in use'),
    );
  }

  async list(): Promise<ReplyOf<'listRegions'>> {
    const { context } = this;
    const { bbox } = context.region.dto;
    const storm = await openStorm();
    const [regions, latestImport, latestSwitch, files, technicians, areas] = await Promise.all([
      listRegions(context.config.tilesFolder),
      this.imports.latest(),
      findSwitch(context.sequelize, null),
      this.files.list(),
      TechnicianRecord.findAll({ order: [['name', 'ASC']] }),
      storm ? AreaRecord.findAll({ where: { stormId: storm.id }, order: [['name', 'ASC']] }) : [],
    ]);
    const box = bbox;
    return {
      regions: await Promise.all(regions.map((region) => this.kept(region))),
      latestImport,
      latestSwitch,
      files,
      filesFolder: context.config.regionFilesFolder,
      mostUploadBytes: context.config.mostRegionUploadBytes,
      techniciansOutside: technicians
        .filter(({ startLon, startLat }) => !isWithin([startLon, startLat], box))
        .map(({ name }) => name),
      areasOutside: areas
        .filter(
          (area) =>
            !area
              .ground()
              .flat(2)
              .some((corner) => isWithin(corner, box)),
        )
        .map(({ name }) => name),
    };
  }

  /** @throws Refusal `not-found`, `already-used`, `region-busy`, `region-file-refused` */
  async use(person: Actor, body: BodyOf<'useRegion'>): Promise<RegionSwitchDto> {
    const region = await this.find(body.key);
    // Opened first: once the switch is written, nothing may stand in its way.
    const opened = isReadable(region) ? await openRegion(region) : null;
    return switchRegion(this.context, person, body, region, (switchId) => {
      if (opened) this.adopt(opened, switchId);
    });
  }

  /** @throws Refusal `not-found`, `already-used` */
  async remove(person: Actor, body: BodyOf<'removeRegion'>): Promise<{ done: true }> {
    const region = await this.find(body.key);
    return runCommand(this.context, orderFrom('removeRegion', person, body), async (job) => {
      await select(
        job.sequelize,
        'SELECT id FROM region_in_use WHERE id = 1 FOR UPDATE',
        [],
        job.tx,
      );
      const inUse = (await regionInUse(job.sequelize, job.tx))?.key ?? this.context.region.key;
      if (inUse === body.key)
        throw new Refusal(
          'already-used',
          `${region.manifest.name} is in use. Switch to another region before you remove it.`,
        );
      job.note('region', region.manifest.hash, `removed the region ${region.manifest.name}`);
      job.afterCommit(
        () =>
          void removeRegionFolder(this.context.config.tilesFolder, body.key).catch(
            (error: unknown) =>
              this.context.log.error({ err: error, key: body.key }, 'could not remove a region'),
          ),
      );
      return { done: true as const };
    });
  }

  /** @throws Refusal `not-found` */
  async unlocated(switchId: string): Promise<ReplyOf<'unlocatedCalls'>> {
    const found = await findSwitch(this.context.sequelize, switchId);
    if (!found) throw new Refusal('not-found', 'There is no such switch.');
    const calls = await select<{
      id: string;
      number: number;
      text: string;
      outcome: 'kept' | 'outside';
    }>(
      this.context.sequelize,
      `SELECT c.id, c.number, c.address_text AS text, s.outcome
         FROM region_switch_calls s JOIN calls c ON c.id = s.call_id
        WHERE s.switch_id = ? ORDER BY s.outcome DESC, c.number LIMIT 2000`,
      [switchId],
    );
    return {
      change: found,
      calls: calls.map(({ id, number, text, outcome }) => ({
        callId: id,
        number,
        address: text,
        outcome,
      })),
    };
  }

  /** For tests: waits until calls are located. */
  async settled(): Promise<void> {
    await Promise.all(this.locating.values());
  }

  async stop(): Promise<void> {
    await this.watch.stop();
    await this.imports.stop();
    await this.settled();
  }

  /** Follows the database: another server or the command line may have switched. */
  private async look(): Promise<void> {
    await this.imports.endSilent();
    const wanted = await regionInUse(this.context.sequelize);
    if (!wanted) return;
    const { key, switchId } = wanted;
    if (key === this.context.region.key) {
      if (switchId) this.locate(this.context.region.now, switchId);
      return;
    }
    const region = await findRegion(this.context.config.tilesFolder, key);
    if (!region || !isReadable(region)) {
      if (this.unopened !== key)
        this.context.log.error({ key }, 'the region in use is not in the folder of regions here');
      this.unopened = key;
      return;
    }
    this.unopened = null;
    const opened = await openRegion(region);
    this.adopt(opened, switchId);
  }

  private adopt(region: RegionInUse, switchId: string | null): void {
    this.context.region.switchTo(region);
    this.context.roads
      ?.switchTo({
        folder: join(this.context.config.tilesFolder, region.key),
        name: region.dto.name,
      })
      .catch((error: unknown) => {
        this.context.log.error({ err: error }, 'the roads of the region could not be read');
      });
    this.context.live.regionChanged(region.dto);
    this.context.log.info({ key: region.key }, 'another region is in use');
    if (switchId) this.locate(region, switchId);
  }

  private locate(region: RegionInUse, switchId: string): void {
    if (this.locating.has(switchId)) return;
    const work = relocateCalls(this.context, region, switchId).catch((error: unknown) => {
      this.context.log.error({ err: error, switchId }, 'calls could not be located');
      // The next look goes on where this stopped.
      this.locating.delete(switchId);
    });
    this.locating.set(switchId, work);
  }

  private async find(key: string): Promise<ImportedRegion> {
    const region = await findRegion(this.context.config.tilesFolder, key);
    if (!region) throw new Refusal('not-found', 'There is no such region any more.');
    return region;
  }

  private async kept(region: ImportedRegion): Promise<KeptRegion> {
    const { manifest, folder } = region;
    const { addresses, streets, places, tiles, bytes } = manifest.counts;
    // An earlier importer did not measure the roads.
    const measured: Partial<RegionCounts> = manifest.counts;
    return {
      key: keyOf(region),
      name: manifest.name,
      timeZone: manifest.timeZone,
      attribution: manifest.attribution,
      isInUse: keyOf(region) === this.context.region.key,
      isOutdated: !isReadable(region),
      counts: {
        addresses,
        streets,
        places,
        tiles,
        roadKm: measured.roadKm ?? 0,
        bytes,
      },
      report: await readReport(folder),
    };
  }
}
