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
import { TimeField } from '../intake/time-field';
import { canClose, LEAST_CORNERS } from './outline';
import { OvertakenBox } from './overtaken-box';
import { StormRoadEditor } from './storm-road-editor';
import { KIND_WORDS } from './storm-road-words';

/** Beside the map while a storm road is put on it or changed. */
@Component({
  selector: 'thaw-storm-road-form',
  imports: [OvertakenBox, TimeField],
  templateUrl: './storm-road-form.html',
  styleUrls: ['./map-panel.scss', './storm-road-form.scss'],
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class StormRoadForm {
  protected readonly editor = inject(StormRoadEditor);

  readonly cancelled = output();
  /** Whoever uses no pointer acts at the middle of the map. */
  readonly pickedAtCentre = output();

  private readonly heading = viewChild.required<ElementRef<HTMLElement>>('heading');
  protected readonly kinds = STORM_ROAD_KINDS.map((kind) => ({ kind, words: KIND_WORDS[kind] }));
  protected readonly leastCorners = LEAST_CORNERS;
  protected readonly corners = computed(() => this.editor.outline().corners.length);
  protected readonly canFinish = computed(() => canClose(this.editor.outline()));
  protected readonly title = computed(() => this.editor.base()?.name ?? 'New storm road');

  constructor() {
    effect(() => {
      const heading = this.heading().nativeElement;
      if (untracked(() => this.editor.base()) !== null) heading.focus();
    });
  }
}
