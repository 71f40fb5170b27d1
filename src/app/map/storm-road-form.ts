import {
  ChangeDetectionStrategy,
  Component,
  computed,
  effect,
  type ElementRef,
  inject,
  output,
  untracked,
  viewChild,
} from '@angular/core';
import { STORM_ROAD_KINDS } from '@shared/domain/roads/conditions';
import { fromNowWords } from '../board/time-words';
import { Clock } from '../core/clock';
import { Zone } from '../core/zone';
import { canClose, LEAST_CORNERS } from './outline';
import { StormRoadEditor } from './storm-road-editor';
import { KIND_WORDS } from './storm-road-words';
import { TimeField } from './time-field';

/** Beside the map while a storm road is put on it or changed. */
@Component({
  selector: 'thaw-storm-road-form',
  imports: [TimeField],
  templateUrl: './storm-road-form.html',
  styleUrls: ['./map-panel.scss', './storm-road-form.scss'],
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class StormRoadForm {
  protected readonly editor = inject(StormRoadEditor);
  private readonly clock = inject(Clock);
  private readonly zone = inject(Zone);

  readonly cancelled = output();
  /** Whoever uses no pointer acts at the middle of the map. */
  readonly pickedAtCentre = output();

  private readonly heading = viewChild.required<ElementRef<HTMLElement>>('heading');
  protected readonly kinds = STORM_ROAD_KINDS.map((kind) => ({ kind, words: KIND_WORDS[kind] }));
  protected readonly leastCorners = LEAST_CORNERS;
  protected readonly corners = computed(() => this.editor.outline().corners.length);
  protected readonly canFinish = computed(() => canClose(this.editor.outline()));
  protected readonly title = computed(() => this.editor.base()?.name ?? 'New storm road');
  protected readonly startWords = computed(() => this.meaning(this.editor.draft().start.at));
  protected readonly endWords = computed(() => this.meaning(this.editor.draft().end.at));

  constructor() {
    effect(() => {
      const heading = this.heading().nativeElement;
      if (untracked(() => this.editor.base()) !== null) heading.focus();
    });
  }

  private meaning(at: number | null): string {
    return at === null ? '' : `${this.zone.dayTime(at)}, ${fromNowWords(at, this.clock.now())}`;
  }
}
