import {
  ChangeDetectionStrategy,
  Component,
  computed,
  type ElementRef,
  inject,
  input,
  output,
  signal,
  viewChild,
} from '@angular/core';
import { SKILLS, type Skill } from '@shared/domain/skills';
import type { CompartmentKind } from '@shared/domain/cold-unit';
import { BoardStore } from '../core/board-store';
import { isFiltering, NO_FILTER, type QueueFilter } from '../core/queue-filter';
import { CONTENTS_WORDS, SKILL_WORDS, STATE_GROUPS } from './queue-words';

/** What of the queue and of the map is shown. Every control is reached by the Tab key. */
@Component({
  selector: 'thaw-queue-filters',
  templateUrl: './queue-filters.html',
  styleUrl: './queue-filters.scss',
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class QueueFilters {
  protected readonly board = inject(BoardStore);

  /** How many rows the filter leaves. */
  readonly shown = input.required<number>();
  /** Enter or Escape in the search: on to the rows. */
  readonly done = output();

  protected readonly stateGroups = STATE_GROUPS;
  protected readonly contents = CONTENTS_WORDS;
  protected readonly skills = SKILLS.map((skill) => ({ skill, label: SKILL_WORDS[skill] }));

  protected readonly filter = this.board.filter;
  /** On a narrow screen the choices are folded away. */
  protected readonly isUnfolded = signal(false);
  protected readonly isFiltering = computed(() => isFiltering(this.filter()));
  protected readonly stateKey = computed(() => {
    const wanted = this.filter().states.join();
    return STATE_GROUPS.find(({ states }) => states.join() === wanted)?.key ?? 'any';
  });
  protected readonly areas = computed(() =>
    [...this.board.areas().values()].sort((a, b) => a.name.localeCompare(b.name)),
  );

  private readonly search = viewChild.required<ElementRef<HTMLInputElement>>('search');

  focusSearch(): void {
    this.search().nativeElement.focus();
    this.search().nativeElement.select();
  }

  clear(): void {
    this.filter.set(NO_FILTER);
  }

  protected set(part: Partial<QueueFilter>): void {
    this.filter.update((filter) => ({ ...filter, ...part }));
  }

  protected setStates(key: string): void {
    this.set({ states: STATE_GROUPS.find((group) => group.key === key)?.states ?? [] });
  }

  protected setContents(kind: string): void {
    this.set({ contents: kind === '' ? [] : [kind as CompartmentKind] });
  }

  protected setSkill(skill: string): void {
    this.set({ skills: skill === '' ? [] : [skill as Skill] });
  }

  protected pressInSearch(event: KeyboardEvent): void {
    if (event.key === 'Enter' || event.key === 'ArrowDown') {
      event.preventDefault();
      this.done.emit();
    } else if (event.key === 'Escape') {
      event.preventDefault();
      // First the words, then the field.
      if (this.filter().text !== '') this.set({ text: '' });
      else this.done.emit();
    }
  }
}
