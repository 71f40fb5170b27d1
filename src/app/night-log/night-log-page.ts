import { Location } from '@angular/common';
import {
  afterNextRender,
  ChangeDetectionStrategy,
  Component,
  computed,
  DestroyRef,
  effect,
  ElementRef,
  inject,
  Injector,
  input,
  signal,
  untracked,
  viewChild,
} from '@angular/core';
import { MatIcon } from '@angular/material/icon';
import { Router } from '@angular/router';
import { BoardStore } from '../core/board-store';
import { type KeyAction, Keys } from '../core/keys';
import { Session } from '../core/session';
import { Zone } from '../core/zone';
import { SetbackBox } from '../ui/setback-box';
import { AsideList } from './aside-list';
import { AsidesModel } from './asides-model';
import { DropFile } from './drop-file';
import { LogView } from './log-view';
import { NightLogModel } from './night-log-model';
import { LOG_STATES, rowWords } from './night-log-words';

/** In the address, in the place of a log: what was put aside. */
const ASIDES = 'aside';

/** Night logs of the answering service: sent, looked at, imported, and what they leave for a person. */
@Component({
  selector: 'thaw-night-log-page',
  imports: [AsideList, DropFile, LogView, MatIcon, SetbackBox],
  templateUrl: './night-log-page.html',
  styleUrls: ['../intake/fields.scss', './night-log-page.scss'],
  providers: [AsidesModel, NightLogModel],
  changeDetection: ChangeDetectionStrategy.OnPush,
  host: { '[class.has-open]': 'side() !== "none"' },
})
export class NightLogPage {
  protected readonly model = inject(NightLogModel);
  protected readonly asides = inject(AsidesModel);
  protected readonly session = inject(Session);
  private readonly board = inject(BoardStore);
  private readonly router = inject(Router);
  private readonly location = inject(Location);
  private readonly zone = inject(Zone);
  private readonly injector = inject(Injector);
  private readonly element = inject<ElementRef<HTMLElement>>(ElementRef);

  /** From the address: the log that is open, or `aside`. */
  readonly log = input<string>();

  private readonly drop = viewChild(DropFile);
  private readonly logView = viewChild(LogView);
  private readonly asideList = viewChild(AsideList);
  private readonly showsAsides = signal(false);

  protected readonly side = computed<'none' | 'log' | 'aside'>(() => {
    if (this.showsAsides()) return 'aside';
    return this.model.openLogId() === null ? 'none' : 'log';
  });
  protected readonly asideCount = computed(() => this.asides.rows()?.length ?? 0);
  protected readonly logs = computed(() =>
    (this.model.logs() ?? []).map((log) => ({
      ...log,
      ...LOG_STATES[log.state],
      isOpen: !this.showsAsides() && log.id === this.model.openLogId(),
      about:
        log.state === 'importing'
          ? `${log.doneCount.toLocaleString('en-US')} of ${rowWords(log.rowCount)}`
          : `${rowWords(log.rowCount)}, ${this.zone.dayTime(log.uploadedAt)}`,
    })),
  );

  constructor() {
    let came: string | undefined;
    effect(() => {
      const wanted = this.log();
      if (wanted === undefined || wanted === came) return;
      if (wanted !== ASIDES && this.model.logs() === null) return;
      came = wanted;
      untracked(() => (wanted === ASIDES ? this.openAsides() : this.openLog(wanted)));
    });
    effect(() => {
      if (this.model.importsEnded() > 0) untracked(() => void this.asides.fetch());
    });
    inject(Keys).register(this.keys(), inject(DestroyRef));
  }

  protected async send(file: File): Promise<void> {
    if (!(await this.model.send(file))) return;
    this.showsAsides.set(false);
    this.writeAddress(this.model.openLogId());
    this.afterRender(() => this.logView()?.focus());
  }

  protected openLog(id: string): void {
    this.showsAsides.set(false);
    void this.model.open(id);
    this.writeAddress(id);
    this.afterRender(() => this.logView()?.focus());
  }

  protected openAsides(): void {
    this.showsAsides.set(true);
    void this.asides.fetch();
    this.writeAddress(ASIDES);
    this.afterRender(() => this.asideList()?.focus());
  }

  protected close(): void {
    this.showsAsides.set(false);
    void this.model.open(null);
    this.writeAddress(null);
  }

  protected toBoard(callId: string): void {
    this.board.selectedCallId.set(callId);
    void this.router.navigate(['/board'], { queryParams: { call: callId } });
  }

  private writeAddress(log: string | null): void {
    this.location.replaceState('/night-logs', log === null ? '' : `log=${log}`);
  }

  /** Rows of the preview and rows that wait are buttons: these keys go from one to the next. */
  private step(by: number): void {
    const rows = [...this.element.nativeElement.querySelectorAll<HTMLElement>('[data-step]')];
    const at = rows.indexOf(document.activeElement as HTMLElement);
    const to = at < 0 ? 0 : Math.min(Math.max(at + by, 0), rows.length - 1);
    rows[to]?.focus();
  }

  private afterRender(act: () => void): void {
    afterNextRender(act, { injector: this.injector });
  }

  private keys(): readonly KeyAction[] {
    const scope = 'Night logs';
    const isOpen = (): boolean => this.side() !== 'none';
    return [
      {
        keys: 'o',
        does: 'Choose a night log',
        scope,
        when: () => this.model.sendingName() === null,
        run: () => this.drop()?.choose(),
      },
      { keys: 'a', does: 'Show what was put aside', scope, run: () => this.openAsides() },
      { keys: 'j', does: 'Next row', scope, repeats: true, when: isOpen, run: () => this.step(1) },
      {
        keys: 'k',
        does: 'The row before',
        scope,
        repeats: true,
        when: isOpen,
        run: () => this.step(-1),
      },
      {
        keys: 'Ctrl+Enter',
        does: 'Import the log with these columns',
        scope,
        when: () => this.side() === 'log' && this.model.preview() !== null,
        run: () => void this.model.import(),
      },
      { keys: 'Escape', does: 'Back to the logs', scope, when: isOpen, run: () => this.close() },
    ];
  }
}
