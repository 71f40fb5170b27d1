import {
  ChangeDetectionStrategy,
  Component,
  computed,
  effect,
  inject,
  signal,
  untracked,
} from '@angular/core';
import { FormControl, FormGroup, ReactiveFormsModule } from '@angular/forms';
import { MatButton } from '@angular/material/button';
import { MatFormFieldModule } from '@angular/material/form-field';
import { MatInput } from '@angular/material/input';
import { MatSelectModule } from '@angular/material/select';
import type { AuditEntryDto, StormDto } from '@shared/contract/office';
import { Announce } from '../core/announce';
import { Api } from '../core/api';
import { BoardStore } from '../core/board-store';
import { problemWords } from '../core/problem-error';
import { Session } from '../core/session';
import { DateTimePipe } from '../core/zone';
import { inWords } from './form-words';
import { StackedTable } from './stacked-table';

/** What belongs to no storm: settings and accounts. */
const OFFICE = 'office';
/** The server gives so many at a time. */
const PAGE = 100;

/** Everything anyone did, newest first. */
@Component({
  selector: 'thaw-audit-part',
  imports: [
    DateTimePipe,
    MatButton,
    MatFormFieldModule,
    MatInput,
    MatSelectModule,
    ReactiveFormsModule,
    StackedTable,
  ],
  templateUrl: './audit-part.html',
  styleUrl: './parts.scss',
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class AuditPart {
  private readonly api = inject(Api);
  private readonly session = inject(Session);
  private readonly board = inject(BoardStore);
  private readonly announce = inject(Announce);
  private asked = 0;

  protected readonly officeId = OFFICE;
  protected readonly form = new FormGroup({
    trail: new FormControl<string>(OFFICE, { nonNullable: true }),
    callNumber: new FormControl('', {
      nonNullable: true,
      validators: inWords<string>((text) =>
        /^\s*(\d{1,7})?\s*$/.test(text) ? null : 'A number, as in 214.',
      ),
    }),
  });
  protected readonly storms = signal<readonly StormDto[]>([]);
  protected readonly entries = signal<readonly AuditEntryDto[] | null>(null);
  protected readonly trouble = signal<string | null>(null);
  protected readonly isBusy = signal(false);
  /** For each page behind this one, before which number it began; the newest began at none. */
  private readonly pages = signal<readonly (number | null)[]>([null]);
  protected readonly pageNumber = computed(() => this.pages().length);
  protected readonly hasOlder = computed(() => this.entries()?.length === PAGE);

  constructor() {
    let isFirst = true;
    effect(() => {
      this.session.storm();
      untracked(() => {
        void this.fetchStorms().then(() => {
          if (!isFirst) return;
          isFirst = false;
          const [newest] = this.storms();
          if (newest) this.form.controls.trail.setValue(newest.id);
          void this.look();
        });
      });
    });
  }

  /** From the newest on, by what the fields say. */
  protected look(): Promise<void> {
    return this.show([null]);
  }

  protected older(): Promise<void> {
    const last = this.entries()?.at(-1);
    return last ? this.show([...this.pages(), last.n]) : Promise.resolve();
  }

  protected newer(): Promise<void> {
    return this.show(this.pages().slice(0, -1));
  }

  /** `call 216`, where the board knows its number. */
  protected subjectWords({ entity, entityId }: AuditEntryDto): string {
    const call = entity === 'call' ? this.board.calls().get(entityId) : undefined;
    return call ? `call ${call.number}` : entity;
  }

  /** `answerPhoneCheck` as `answer phone check`. */
  protected orderWords(command: string): string {
    return command.replace(/[A-Z]/g, (letter) => ` ${letter.toLowerCase()}`);
  }

  private async show(pages: readonly (number | null)[]): Promise<void> {
    const { trail, callNumber } = this.form.controls;
    callNumber.markAsTouched();
    if (callNumber.invalid) return;
    const asked = ++this.asked;
    this.trouble.set(null);
    this.isBusy.set(true);
    try {
      const number = trail.value === OFFICE ? null : Number(callNumber.value.trim()) || null;
      const entityId = number === null ? undefined : await this.callId(trail.value, number);
      if (entityId === null) {
        callNumber.setErrors({ words: `There is no call ${number} in this storm.` });
        return;
      }
      const before = pages.at(-1) ?? null;
      const query = {
        ...(entityId === undefined ? {} : { entityId }),
        ...(before === null ? {} : { before: String(before) }),
      };
      const { entries } =
        trail.value === OFFICE
          ? await this.api.call('officeAudit', { query })
          : await this.api.call('audit', { params: { stormId: trail.value }, query });
      if (asked !== this.asked) return;
      this.entries.set(entries);
      this.pages.set(pages);
      this.announce.say(`${entries.length} entries`);
    } catch (error) {
      if (asked === this.asked) this.trouble.set(problemWords(error));
    } finally {
      if (asked === this.asked) this.isBusy.set(false);
    }
  }

  /** The board knows the open storm's calls; of another storm its picture is fetched. */
  private async callId(stormId: string, number: number): Promise<string | null> {
    const calls =
      this.board.storm()?.id === stormId
        ? [...this.board.calls().values()]
        : (await this.api.call('boardPicture', { params: { stormId } })).calls;
    return calls.find((call) => call.number === number)?.id ?? null;
  }

  private async fetchStorms(): Promise<void> {
    try {
      const { storms } = await this.api.call('listStorms');
      this.storms.set(storms);
    } catch (error) {
      this.trouble.set(problemWords(error));
    }
  }
}
