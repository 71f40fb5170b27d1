import {
  ChangeDetectionStrategy,
  Component,
  computed,
  ElementRef,
  inject,
  signal,
} from '@angular/core';
import { MatButton } from '@angular/material/button';
import type { TechnicianDto } from '@shared/contract/routes';
import { formatPhone } from '@shared/domain/phone-number';
import { BoardStore } from '../core/board-store';
import { Api } from '../core/api';
import { Clock } from '../core/clock';
import { problemWords } from '../core/problem-error';
import { Zone } from '../core/zone';
import { focusFirst } from './focus-first';
import { SKILL_WORDS } from './skill-words';
import { partsOnVan } from './technician-changes';
import { TechnicianForm } from './technician-form';
import { StackedTable } from './stacked-table';

/** Who drives: skills, parts on the van, shifts, and where the day begins. */
@Component({
  selector: 'thaw-technicians-part',
  imports: [MatButton, StackedTable, TechnicianForm],
  templateUrl: './technicians-part.html',
  styleUrl: './parts.scss',
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class TechniciansPart {
  private readonly api = inject(Api);
  private readonly board = inject(BoardStore);
  private readonly clock = inject(Clock);
  private readonly zone = inject(Zone);
  private readonly host = inject<ElementRef<HTMLElement>>(ElementRef);

  private readonly fetched = signal<readonly TechnicianDto[] | null>(null);
  protected readonly trouble = signal<string | null>(null);
  /** `new`, the id of the one that is changed, or nothing. */
  protected readonly edited = signal<string | null>(null);

  /** The board follows changes live, and has technicians only while a storm is open. */
  protected readonly technicians = computed(() => {
    const live = this.board.technicians();
    const fetched = this.fetched();
    if (!fetched && live.size === 0) return null;
    const all = new Map((fetched ?? []).map((one) => [one.id, one]));
    for (const one of live.values()) {
      if ((all.get(one.id)?.version ?? -1) < one.version) all.set(one.id, one);
    }
    return [...all.values()].sort(
      (a, b) => Number(b.active) - Number(a.active) || a.name.localeCompare(b.name),
    );
  });
  protected readonly rows = computed(() =>
    this.technicians()?.map((technician) => ({
      technician,
      phone: formatPhone(technician.phone),
      skills: technician.skills.map((skill) => SKILL_WORDS[skill].name).join(', ') || 'none',
      parts: partsOnVan(technician),
      shift: this.shiftWords(technician),
    })),
  );
  protected readonly editedRow = computed(
    () => this.technicians()?.find(({ id }) => id === this.edited()) ?? null,
  );

  constructor() {
    void this.fetch();
  }

  protected edit(id: string): void {
    this.edited.set(id);
    focusFirst(this.host.nativeElement, 'input');
  }

  protected saved(technician: TechnicianDto): void {
    this.fetched.update((all) => [
      ...(all ?? []).filter(({ id }) => id !== technician.id),
      technician,
    ]);
    this.close(technician.id);
  }

  /** Back to the list, with the focus where it came from. */
  protected close(id: string | null): void {
    this.edited.set(null);
    focusFirst(this.host.nativeElement, id === null ? '[data-of=new]' : `[data-of="${id}"]`);
  }

  private shiftWords({ shifts }: TechnicianDto): string {
    const now = this.clock.now();
    const next = [...shifts]
      .sort((a, b) => a.startsAt - b.startsAt)
      .find(({ endsAt }) => endsAt > now);
    if (!next) return 'none ahead';
    const until = this.zone.clockTime(next.endsAt);
    return next.startsAt <= now
      ? `now, until ${until}`
      : `${this.zone.dayTime(next.startsAt)} to ${until}`;
  }

  private async fetch(): Promise<void> {
    try {
      const { technicians } = await this.api.call('listTechnicians');
      this.fetched.set(technicians);
    } catch (error) {
      this.trouble.set(problemWords(error));
    }
  }
}
