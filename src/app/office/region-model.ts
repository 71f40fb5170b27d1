import { computed, DestroyRef, inject, Injectable, signal } from '@angular/core';
import type { ReplyOf, SentBodyOf } from '@shared/contract/http';
import type {
  KeptRegion,
  RegionFile,
  RegionImportDto,
  RegionSwitchDto,
} from '@shared/contract/regions';
import { Announce } from '../core/announce';
import { Api, newId } from '../core/api';
import { Live } from '../core/live';
import { ProblemError, problemWords } from '../core/problem-error';
import { OrderId } from './order-id';
import { switchWords } from './region-words';

/** The socket tells how an import goes; where it is silent, the page asks. */
const ASK_EVERY_MS = 3_000;

export type FileRole = 'extract' | 'addresses';

/** A file on its way to the server. */
export interface Sending {
  readonly role: FileRole;
  readonly name: string;
  /** 0 to 1. */
  readonly share: number;
}

/** The regions as the owner sees them: kept, being imported, in use. */
@Injectable()
export class RegionModel {
  private readonly api = inject(Api);
  private readonly live = inject(Live);
  private readonly announce = inject(Announce);
  private readonly order = new OrderId();
  private readonly known = signal<ReplyOf<'listRegions'> | null>(null);
  private readonly words = signal<string | null>(null);
  private readonly busy = signal(false);
  private readonly way = signal<Sending | null>(null);
  private readonly left = signal<ReplyOf<'unlocatedCalls'> | null>(null);
  private stopSending: AbortController | null = null;

  readonly all = this.known.asReadonly();
  readonly trouble = this.words.asReadonly();
  readonly isBusy = this.busy.asReadonly();
  readonly sending = this.way.asReadonly();
  readonly unlocated = this.left.asReadonly();
  readonly import = computed(() => this.known()?.latestImport ?? null);
  readonly isImporting = computed(() => this.import()?.state === 'running');
  readonly change = computed(() => this.known()?.latestSwitch ?? null);
  readonly inUse = computed(() => this.known()?.regions.find(({ isInUse }) => isInUse) ?? null);

  constructor() {
    const stops = [
      this.live.on('region:import-progressed', (progress) => this.takeImport(progress)),
      this.live.on('region:switch-progressed', (progress) => this.takeSwitch(progress)),
      this.live.on('region:changed', () => void this.fetch()),
    ];
    const asking = setInterval(() => void this.askAgain(), ASK_EVERY_MS);
    inject(DestroyRef).onDestroy(() => {
      for (const stop of stops) stop();
      clearInterval(asking);
      this.stopSending?.abort();
    });
    void this.fetch();
  }

  async fetch(): Promise<void> {
    try {
      const all = await this.api.call('listRegions');
      this.known.set(all);
      await this.fetchUnlocated(all.latestSwitch);
    } catch (error) {
      this.words.set(problemWords(error));
    }
  }

  /** Sends a file; resolves to it, or to null when that was stopped or refused. */
  async send(role: FileRole, file: File): Promise<RegionFile | null> {
    const most = this.known()?.mostUploadBytes ?? 0;
    if (file.size > most) {
      this.words.set(
        `${file.name} is larger than ${String(Math.round(most / 1e6))} MB. Lay it into the server’s folder instead, or cut it down to the counties that you serve.`,
      );
      return null;
    }
    this.words.set(null);
    this.stopSending = new AbortController();
    this.way.set({ role, name: file.name, share: 0 });
    try {
      const sent = await this.api.upload(
        'uploadRegionFile',
        { query: { fileName: file.name.slice(-200) }, body: file },
        (share) => this.way.update((way) => way && { ...way, share }),
        this.stopSending.signal,
      );
      this.known.update((all) => all && { ...all, files: [sent, ...all.files] });
      this.announce.say(`${file.name} has been sent.`);
      return sent;
    } catch (error) {
      if (!(error instanceof DOMException)) this.words.set(problemWords(error));
      return null;
    } finally {
      this.way.set(null);
      this.stopSending = null;
    }
  }

  cancelSending(): void {
    this.stopSending?.abort();
  }

  /** @throws ProblemError what the form's fields have to answer for */
  async startImport(
    asked: Omit<SentBodyOf<'importRegion'>, 'commandId' | 'importId'>,
  ): Promise<void> {
    const commandId = this.order.idFor(asked);
    this.busy.set(true);
    this.words.set(null);
    try {
      // The same order has the same import, also when it is sent again after a lost connection.
      const begun = await this.api.call('importRegion', {
        body: { commandId, importId: commandId, ...asked },
      });
      this.order.done();
      this.takeImport(begun);
      this.announce.say(`The import of ${begun.name} has begun.`);
    } finally {
      this.busy.set(false);
    }
  }

  cancelImport(importId: string): Promise<void> {
    return this.attempt(async () => {
      this.takeImport(
        await this.api.call('cancelRegionImport', {
          params: { importId },
          body: { commandId: newId() },
        }),
      );
      this.announce.notice('The import is stopped. Nothing of it stays.');
    });
  }

  use({ key, name }: KeptRegion): Promise<void> {
    return this.attempt(async () => {
      const change = await this.api.call('useRegion', {
        body: { commandId: this.order.idFor({ use: key }), key },
      });
      this.order.done();
      this.announce.notice(`${name} is in use.`);
      this.takeSwitch(change);
      await this.fetch();
    });
  }

  remove({ key, name }: KeptRegion): Promise<void> {
    return this.attempt(async () => {
      await this.api.call('removeRegion', {
        body: { commandId: this.order.idFor({ remove: key }), key },
      });
      this.order.done();
      this.known.update(
        (all) => all && { ...all, regions: all.regions.filter((region) => region.key !== key) },
      );
      this.announce.notice(`${name} is removed.`);
    });
  }

  private async attempt(work: () => Promise<void>): Promise<void> {
    this.words.set(null);
    this.busy.set(true);
    try {
      await work();
    } catch (error) {
      this.words.set(problemWords(error));
    } finally {
      this.busy.set(false);
    }
  }

  private takeImport(progress: RegionImportDto): void {
    const before = this.import();
    // A reply that was on its way while the import ended is older than its end.
    if (before?.id === progress.id && before.state !== 'running' && progress.state === 'running')
      return;
    this.known.update((all) => all && { ...all, latestImport: progress });
    if (progress.state === 'running' || (before?.id === progress.id && before.state !== 'running'))
      return;
    void this.fetch();
    if (progress.state === 'done') this.announce.say(`${progress.name} is imported.`);
    else if (progress.state === 'failed')
      this.announce.say(`The import failed. ${progress.trouble ?? ''}`);
  }

  private takeSwitch(progress: RegionSwitchDto): void {
    const before = this.change();
    this.known.update((all) => all && { ...all, latestSwitch: progress });
    if (progress.state !== 'done' || (before?.id === progress.id && before.state === 'done'))
      return;
    this.announce.say(switchWords(progress));
    void this.fetchUnlocated(progress);
  }

  private async fetchUnlocated(change: RegionSwitchDto | null): Promise<void> {
    if (!change || change.state !== 'done' || change.kept + change.outside === 0) {
      this.left.set(null);
      return;
    }
    try {
      this.left.set(await this.api.call('unlocatedCalls', { params: { switchId: change.id } }));
    } catch (error) {
      this.words.set(problemWords(error));
    }
  }

  private async askAgain(): Promise<void> {
    const running = this.import();
    try {
      if (running?.state === 'running')
        this.takeImport(
          await this.api.call('readRegionImport', { params: { importId: running.id } }),
        );
      if (this.change()?.state === 'locating') await this.fetch();
    } catch (error) {
      // The socket or the next question tells.
      if (!(error instanceof ProblemError)) throw error;
    }
  }
}
