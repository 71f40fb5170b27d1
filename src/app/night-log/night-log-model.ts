import { computed, DestroyRef, effect, inject, Injectable, signal, untracked } from '@angular/core';
import type { NightLogDto, NightLogPreview } from '@shared/contract/night-logs';
import { type ColumnRole, withRole } from '@shared/domain/night-log/column-map';
import { Announce } from '../core/announce';
import { Api, newId } from '../core/api';
import { Live } from '../core/live';
import { ProblemError } from '../core/problem-error';
import { Session } from '../core/session';
import { MOST_BYTES, resultWords } from './night-log-words';

/** Several changes of the columns in a row are previewed once. */
const PREVIEW_AFTER_MS = 350;
/** The socket tells of an import's progress; where it is silent, the page asks. */
const ASK_EVERY_MS = 3_000;

/** What stood in the way, and what may be tried again. */
export interface Setback {
  readonly words: string;
  readonly retry: (() => Promise<void>) | null;
}

/** The storm's night logs, and the one that is being looked at: its columns, preview and import. */
@Injectable()
export class NightLogModel {
  private readonly api = inject(Api);
  private readonly live = inject(Live);
  private readonly session = inject(Session);
  private readonly announce = inject(Announce);

  private readonly known = signal<readonly NightLogDto[] | null>(null);
  private readonly openId = signal<string | null>(null);
  private readonly shown = signal<NightLogPreview | null>(null);
  private readonly stopped = signal<Setback | null>(null);
  private readonly sending = signal<string | null>(null);
  private readonly previewing = signal(false);
  private readonly starting = signal(false);
  private readonly imports = signal(0);

  private previewTimer: ReturnType<typeof setTimeout> | undefined;
  private previews = 0;
  /** How often the socket has told of a log: what it tells is newer than a reply under way. */
  private readonly told = new Map<string, number>();

  /** Newest first; `null` until the first answer. */
  readonly logs = this.known.asReadonly();
  readonly openLogId = this.openId.asReadonly();
  readonly setback = this.stopped.asReadonly();
  /** The name of the file that is on its way. */
  readonly sendingName = this.sending.asReadonly();
  /** Whether the preview is being worked out again; the one before stays in sight. */
  readonly isPreviewing = this.previewing.asReadonly();
  readonly isStarting = this.starting.asReadonly();
  /** Counts the imports that have ended while this page was open. */
  readonly importsEnded = this.imports.asReadonly();

  /** How the open log stands: its state, and how far its import is. */
  readonly log = computed<NightLogDto | null>(() => {
    const id = this.openId();
    return this.known()?.find((log) => log.id === id) ?? this.preview()?.log ?? null;
  });
  readonly preview = computed(() => {
    const shown = this.shown();
    return shown?.log.id === this.openId() ? shown : null;
  });
  readonly columns = computed(() => this.preview()?.log.columns ?? []);
  readonly rows = computed(() => this.preview()?.rows ?? []);

  constructor() {
    effect(() => {
      this.session.storm();
      untracked(() => void this.fetch());
    });
    const stop = this.live.on('night-log:progressed', (log) => {
      this.told.set(log.id, (this.told.get(log.id) ?? 0) + 1);
      this.take(log);
    });
    const asking = setInterval(() => void this.askProgress(), ASK_EVERY_MS);
    inject(DestroyRef).onDestroy(() => {
      stop();
      clearInterval(asking);
      clearTimeout(this.previewTimer);
    });
  }

  async fetch(): Promise<void> {
    const stormId = this.session.storm()?.id;
    if (!stormId) {
      this.known.set(null);
      return;
    }
    await this.attempt(async () => {
      const { logs } = await this.api.call('listNightLogs', { params: { stormId } });
      this.known.set(logs);
    });
  }

  /** Sends a file. It stays in the page until the server has read it, so that nothing is chosen twice. */
  async send(file: File): Promise<boolean> {
    const stormId = this.session.storm()?.id;
    if (!stormId || this.sending() !== null) return false;
    if (file.size > MOST_BYTES) {
      this.stopped.set({ words: tooBigWords(file), retry: null });
      return false;
    }
    this.sending.set(file.name);
    const sent = await this.attempt(
      async () => {
        const bytes = await file.arrayBuffer();
        const preview = await this.api.call('uploadNightLog', {
          params: { stormId },
          query: { fileName: file.name.slice(-200) },
          body: bytes,
        });
        this.take(preview.log);
        this.openId.set(preview.log.id);
        this.shown.set(preview);
      },
      () => this.send(file),
    );
    this.sending.set(null);
    return sent;
  }

  async open(logId: string | null): Promise<void> {
    this.openId.set(logId);
    this.stopped.set(null);
    clearTimeout(this.previewTimer);
    const log = this.log();
    if (log && this.shown()?.log.id !== logId) await this.look(log.columns.map(({ role }) => role));
  }

  /** Gives a column another role; a role that only one column can have is taken from the other. */
  setRole(index: number, role: ColumnRole): void {
    const preview = this.preview();
    if (!preview) return;
    const { columns } = withRole({ columns: preview.log.columns }, index, role);
    const before = new Map(preview.log.columns.map((column) => [column.index, column]));
    const next = columns.map((column) => ({
      ...column,
      header: column.header ?? '',
      samples: before.get(column.index)?.samples ?? [],
    }));
    this.shown.set({ ...preview, log: { ...preview.log, columns: next } });
    clearTimeout(this.previewTimer);
    this.previewing.set(true);
    this.previewTimer = setTimeout(() => void this.look(this.roles()), PREVIEW_AFTER_MS);
  }

  /** Imports the open log with the columns as they stand. */
  async import(): Promise<void> {
    const logId = this.openId();
    if (logId === null || this.starting() || this.log()?.state === 'importing') return;
    const body = { commandId: newId(), columns: this.roles() };
    this.starting.set(true);
    const start = async (): Promise<void> => {
      await this.attempt(async () => {
        await this.askUnlessTold(logId, () =>
          this.api.call('importNightLog', { params: { logId }, body }),
        );
      }, start);
    };
    await start();
    this.starting.set(false);
  }

  dismissSetback(): void {
    this.stopped.set(null);
  }

  private roles(): ColumnRole[] {
    return this.columns().map(({ role }) => role);
  }

  /** Asks what these roles would make of the open log. The newest question wins. */
  private async look(columns: ColumnRole[]): Promise<void> {
    const logId = this.openId();
    if (logId === null) return;
    const look = ++this.previews;
    this.previewing.set(true);
    await this.attempt(
      async () => {
        const preview = await this.api.call('previewNightLog', {
          params: { logId },
          body: { columns },
        });
        if (look === this.previews && this.openId() === logId) this.shown.set(preview);
      },
      () => this.look(columns),
    );
    if (look === this.previews) this.previewing.set(false);
  }

  /** Takes the reply, unless the socket has told of the log since the question. */
  private async askUnlessTold(logId: string, ask: () => Promise<NightLogDto>): Promise<void> {
    const told = this.told.get(logId);
    const log = await ask();
    if (this.told.get(logId) === told) this.take(log);
  }

  private take(log: NightLogDto): void {
    if (log.stormId !== this.session.storm()?.id) return;
    const before = this.known()?.find(({ id }) => id === log.id);
    this.known.update((logs) =>
      [log, ...(logs ?? []).filter(({ id }) => id !== log.id)].sort(newestFirst),
    );
    if (before?.state !== 'importing' || log.state === 'importing') return;
    this.imports.update((count) => count + 1);
    if (log.id === this.openId()) {
      // The rows are known from now on, and say which call they went into.
      void this.look(this.roles());
      this.announce.say(log.state === 'imported' ? resultWords(log) : (log.trouble ?? ''));
    }
  }

  private async askProgress(): Promise<void> {
    for (const { id, state } of this.known() ?? []) {
      if (state !== 'importing') continue;
      try {
        await this.askUnlessTold(id, () =>
          this.api.call('readNightLog', { params: { logId: id } }),
        );
      } catch (error) {
        // The socket or the next question tells.
        if (!(error instanceof ProblemError)) throw error;
      }
    }
  }

  /** Runs something; what stands in its way is shown, with another attempt where that may help. */
  private async attempt(
    work: () => Promise<void>,
    again: () => Promise<unknown> = () => this.attempt(work),
  ): Promise<boolean> {
    try {
      this.stopped.set(null);
      await work();
      return true;
    } catch (error) {
      if (error instanceof ProblemError) {
        const mayRetry = error.code === 'no-connection' || error.code === 'busy';
        const retry = mayRetry ? async () => void (await again()) : null;
        this.stopped.set({ words: error.message, retry });
        return false;
      }
      // DOMException: the file was moved or changed after it was chosen.
      if (!(error instanceof DOMException)) throw error;
      this.stopped.set({
        words: 'The file cannot be read any more. Choose it again.',
        retry: null,
      });
      return false;
    }
  }
}

function tooBigWords(file: File): string {
  const megabytes = (file.size / 1024 / 1024).toFixed(1);
  return `${file.name} has ${megabytes} MB; a night log may have ${MOST_BYTES / 1024 / 1024} MB. Export it in parts, by night or by hour: rows that come twice are taken once.`;
}

const newestFirst = (a: NightLogDto, b: NightLogDto): number => b.uploadedAt - a.uploadedAt;
