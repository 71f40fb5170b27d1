import {
  ChangeDetectionStrategy,
  Component,
  computed,
  effect,
  type ElementRef,
  inject,
  output,
  signal,
  untracked,
  viewChild,
} from '@angular/core';
import { TimeField } from '../intake/time-field';
import { AreaEditor } from './area-editor';
import { AreaOverlaps } from './area-overlap-list';
import { shapeWords } from './area-ground';
import { FeederList } from './feeder-list';
import { FeederPick } from './feeder-pick';
import { canClose, LEAST_CORNERS, removeCorner, selectNext } from './outline';
import { OvertakenBox } from './overtaken-box';

/** Beside the map while an outage area is drawn or changed: what to do next, its times, saving. */
@Component({
  selector: 'thaw-area-form',
  imports: [AreaOverlaps, FeederList, OvertakenBox, TimeField],
  templateUrl: './area-form.html',
  styleUrl: './map-panel.scss',
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class AreaForm {
  protected readonly editor = inject(AreaEditor);
  protected readonly feeders = inject(FeederPick);

  /** The corner that the buttons have just chosen; the map shows it. */
  readonly cornerChosen = output<number>();
  readonly cornerAtCentre = output();
  readonly cancelled = output();
  /** The ground is to be drawn, picked from feeders, or taken from a file instead. */
  readonly otherWay = output<'draw' | 'feeders' | 'file'>();

  private readonly nameField = viewChild<ElementRef<HTMLInputElement>>('name');
  protected readonly isRemoving = signal(false);
  protected readonly leastCorners = LEAST_CORNERS;

  protected readonly title = computed(() => this.editor.base()?.name ?? 'New outage area');
  protected readonly canFinish = computed(() => canClose(this.editor.outline()));
  protected readonly isNew = computed(() => !this.editor.base() && !this.editor.isGone());
  protected readonly wholeWords = computed(() => {
    const whole = this.editor.whole();
    return whole ? shapeWords(whole) : '';
  });
  protected readonly corners = computed(() => this.editor.outline().corners.length);
  protected readonly selectedCorner = computed(() => this.editor.outline().selected);
  protected readonly insideWords = computed(() => {
    const inside = this.editor.callsInside();
    if (inside === 0) return 'No open call lies inside.';
    return inside === 1
      ? '1 open call lies inside. Unless it has times of its own, it takes these.'
      : `${inside} open calls lie inside. Those without times of their own take these.`;
  });

  constructor() {
    // The hand goes from the last corner to the name.
    effect(() => {
      const name = this.nameField()?.nativeElement;
      const isTyping = untracked(() => this.editor.base() !== null || this.feeders.isOn());
      if (name && !isTyping) name.focus();
    });
  }

  protected choose(step: 1 | -1): void {
    const { selected } = selectNext(this.editor.outline(), step);
    this.editor.select(selected);
    if (selected !== null) this.cornerChosen.emit(selected);
  }

  protected removeChosen(): void {
    const { selected } = this.editor.outline();
    if (selected !== null) this.editor.shape((outline) => removeCorner(outline, selected));
  }

  protected moveCorners(): void {
    this.feeders.stop();
    this.editor.moveCorners();
  }
}
