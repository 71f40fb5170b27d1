import { computed, inject, Injectable, signal } from '@angular/core';
import type { LonLat } from '@shared/contract/common';
import type { RoadStretch, StormRoadDto, StormRoadShape } from '@shared/contract/storm-roads';
import { lengthKm } from '@shared/domain/storm-roads';
import { Announce } from '../core/announce';
import { Api, newId } from '../core/api';
import { BoardStore } from '../core/board-store';
import { Clock } from '../core/clock';
import { ProblemError, problemWords } from '../core/problem-error';
import { Zone } from '../core/zone';
import {
  addCorner,
  canClose,
  closed,
  crossesItself,
  EMPTY_OUTLINE,
  type Outline,
  outlineOf,
  ringOf,
  select,
} from './outline';
import {
  changedContent,
  contentOf,
  draftOf,
  newDraft,
  setUntilNotice,
  type StormRoadContent,
  type StormRoadDraft,
  typeEnd,
  typeStart,
} from './storm-road-draft';
import { Saving } from './saving';
import { StormRoadActs } from './storm-road-acts';
import { stormRoadChanges } from './storm-road-words';

type Found = NonNullable<RoadStretch['stretch']>;

/**
 * A storm road while it is put on the map or changed: the places picked on the road and the way between
 * them, or an outline; its times; what went wrong. What somebody else saves meanwhile is shown first.
 */
@Injectable()
export class StormRoadEditor {
  private readonly api = inject(Api);
  private readonly board = inject(BoardStore);
  private readonly clock = inject(Clock);
  private readonly zone = inject(Zone);
  private readonly announce = inject(Announce);
  private readonly acts = inject(StormRoadActs);

  private readonly isOpenNow = signal(false);
  private readonly baseNow = signal<StormRoadDto | null>(null);
  private readonly draftNow = signal<StormRoadDraft>(newDraft(0));
  private readonly drawsAreaNow = signal(false);
  private readonly picksNow = signal<readonly LonLat[]>([]);
  private readonly stretchNow = signal<Found | null>(null);
  private readonly outlineNow = signal<Outline>(EMPTY_OUTLINE);
  private readonly earlier = signal<readonly Outline[]>([]);
  private readonly seeking = signal(false);
  private readonly saving = new Saving<StormRoadDto>((current) =>
    this.board.takeReply({ kind: 'storm-roads', roads: [current], gone: [] }),
  );
  private roadId = '';
  private asked = 0;

  readonly isOpen = this.isOpenNow.asReadonly();
  readonly base = this.baseNow.asReadonly();
  readonly draft = this.draftNow.asReadonly();
  /** Whether an area is drawn; else a stretch of road is picked. */
  readonly drawsArea = this.drawsAreaNow.asReadonly();
  readonly picks = this.picksNow.asReadonly();
  readonly outline = this.outlineNow.asReadonly();
  readonly isBusy = this.saving.isBusy;
  readonly isSeeking = this.seeking.asReadonly();
  readonly problem = this.saving.problem;
  readonly isDrawing = computed(
    () => this.isOpen() && this.drawsArea() && !this.outline().isClosed,
  );
  readonly canUndo = computed(() =>
    this.drawsArea() ? this.earlier().length > 0 : this.picks().length > 0,
  );
  /** The way that was found between the places picked, for the map to show. */
  readonly line = computed(() => (this.drawsArea() ? null : (this.stretchNow()?.points ?? null)));
  readonly stretchWords = computed(() => {
    const stretch = this.stretchNow();
    if (!stretch) return '';
    const name = stretch.name ?? 'Road without a name';
    return `${name}, ${(stretch.metres / 1609.344).toFixed(stretch.metres < 1609 ? 2 : 1)} miles`;
  });

  readonly theirs = computed<StormRoadDto | null>(() => {
    const base = this.base();
    const now = base && this.board.stormRoads().get(base.id);
    return now && now.version > base.version ? now : null;
  });
  readonly theirChanges = computed(() => {
    const base = this.base();
    const theirs = this.theirs();
    return base && theirs ? stormRoadChanges(base, theirs, this.words) : [];
  });
  /** Somebody else has taken it back altogether. */
  readonly isGone = computed(() => {
    const base = this.base();
    return base !== null && !this.board.stormRoads().has(base.id);
  });

  draw(): void {
    this.start(null, newDraft(this.clock.exact()), null);
    this.announce.say('Pick the road: click it, or press Enter at the cross-hair.');
  }

  change(road: StormRoadDto): void {
    this.start(road, draftOf(road, this.words), road.shape);
  }

  cancel(): void {
    this.isOpenNow.set(false);
    this.baseNow.set(null);
  }

  edit(changes: Partial<StormRoadDraft>): void {
    this.draftNow.update((draft) => ({ ...draft, ...changes }));
  }
  typeStart(text: string): void {
    this.draftNow.update((draft) => typeStart(draft, text, this.clock.exact(), this.zone.name()));
  }
  typeEnd(text: string): void {
    this.draftNow.update((draft) => typeEnd(draft, text, this.clock.exact(), this.zone.name()));
  }
  setUntilNotice(isUntilNotice: boolean): void {
    this.draftNow.update((draft) => setUntilNotice(draft, isUntilNotice));
  }
  setDrawsArea(drawsArea: boolean): void {
    this.drawsAreaNow.set(drawsArea);
    this.saving.say('');
  }

  /** A place on the road: the first takes the whole piece between two junctions, a second the way between. */
  async pick(at: LonLat): Promise<void> {
    const before = this.picks();
    const picks = before.length === 1 ? [...before, at] : [at];
    this.picksNow.set(picks);
    await this.seek(picks);
  }

  addCorner(corner: LonLat): void {
    this.shape((outline) => addCorner(outline, corner));
  }
  finish(): void {
    if (!canClose(this.outline())) return;
    this.shape(closed);
    this.announce.say('The outline is finished. Give it a name and its times.');
  }
  shape(step: (outline: Outline) => Outline): void {
    const before = this.outline();
    const after = step(before);
    if (after === before) return;
    this.earlier.update((steps) => [...steps, before]);
    this.outlineNow.set(after);
  }
  drag(step: (outline: Outline) => Outline): void {
    this.outlineNow.update(step);
  }
  select(index: number | null): void {
    this.outlineNow.update((outline) => select(outline, index));
  }

  undo(): void {
    if (!this.drawsArea()) {
      const picks = this.picks().slice(0, -1);
      this.picksNow.set(picks);
      if (picks.length > 0) void this.seek(picks);
      else this.stretchNow.set(null);
      return;
    }
    const last = this.earlier().at(-1);
    if (!last) return;
    this.earlier.update((steps) => steps.slice(0, -1));
    this.outlineNow.set(last);
  }

  /** Goes on with the person's own changes; what they did not touch becomes the other's. */
  keepMine(): void {
    const base = this.base();
    const theirs = this.theirs();
    if (!base || !theirs) return;
    const read = contentOf(this.draft(), this.shapeNow());
    const mine = 'content' in read ? changedContent(base, read.content) : {};
    this.change(theirs);
    const merged = { ...theirs, ...mine };
    this.draftNow.set(draftOf(merged, this.words));
    this.takeShape(merged.shape);
  }
  takeTheirs(): void {
    const theirs = this.theirs();
    if (theirs) this.change(theirs);
  }
  keepAsNew(): void {
    this.baseNow.set(null);
    this.roadId = newId();
  }

  async save(): Promise<void> {
    if (this.isBusy()) return;
    const read = contentOf(this.draft(), this.shapeNow());
    if ('problem' in read) return this.saving.say(read.problem);
    if (this.drawsArea() && crossesItself(this.outline()))
      return this.saving.say('The outline crosses itself. Move a corner until it does not.');
    if (this.theirs())
      return this.saving.say('Somebody else changed this. Decide first whose version stays.');
    await this.saving.run(async () => {
      const road = await this.send(read.content);
      this.board.takeReply({ kind: 'storm-roads', roads: [road], gone: [] });
      this.cancel();
      this.acts.noticeOf(road, 'is saved');
    });
  }

  private readonly shapeNow = (): StormRoadShape | null => {
    if (this.drawsArea()) {
      const ring = ringOf(this.outline());
      return ring && this.outline().isClosed ? { type: 'area', ring } : null;
    }
    const stretch = this.stretchNow();
    return stretch && stretch.points.length >= 2 ? { type: 'line', points: stretch.points } : null;
  };

  private async seek(picks: readonly LonLat[]): Promise<void> {
    const [from, to] = picks;
    if (!from) return;
    const n = ++this.asked;
    this.seeking.set(true);
    this.saving.say('');
    try {
      const { stretch } = await this.api.call('roadStretch', {
        query: {
          lon: String(from[0]),
          lat: String(from[1]),
          ...(to ? { toLon: String(to[0]), toLat: String(to[1]) } : {}),
        },
      });
      if (n !== this.asked) return;
      this.stretchNow.set(stretch);
      if (!stretch) {
        this.picksNow.set(picks.slice(0, -1));
        this.saving.say(
          to ? 'No way leads between these two places.' : 'No road is near that place.',
        );
        return;
      }
      const draft = this.draft();
      if (!draft.isNameTyped) this.edit({ name: stretch.name ?? '' });
      this.announce.say(this.stretchWords());
    } catch (error) {
      if (!(error instanceof ProblemError)) throw error;
      if (n === this.asked) this.saving.say(problemWords(error));
    } finally {
      if (n === this.asked) this.seeking.set(false);
    }
  }

  private send(content: StormRoadContent): Promise<StormRoadDto> {
    const base = this.base();
    if (!base) {
      const body = { stormRoadId: this.roadId, ...content };
      return this.api.call('addStormRoad', {
        params: { stormId: this.board.storm()?.id ?? '' },
        body: { ...body, commandId: this.saving.commandFor(JSON.stringify(body)) },
      });
    }
    const body = { ...changedContent(base, content), version: base.version };
    return this.api.call('changeStormRoad', {
      params: { stormRoadId: base.id },
      body: { ...body, commandId: this.saving.commandFor(JSON.stringify(body)) },
    });
  }

  private start(
    base: StormRoadDto | null,
    draft: StormRoadDraft,
    shape: StormRoadShape | null,
  ): void {
    this.roadId = base?.id ?? newId();
    this.baseNow.set(base);
    this.draftNow.set(draft);
    this.takeShape(shape);
    this.saving.say('');
    this.isOpenNow.set(true);
  }

  private takeShape(shape: StormRoadShape | null): void {
    this.picksNow.set([]);
    this.earlier.set([]);
    this.drawsAreaNow.set(shape?.type === 'area');
    this.outlineNow.set(shape?.type === 'area' ? outlineOf(shape.ring) : EMPTY_OUTLINE);
    this.stretchNow.set(
      shape?.type === 'line'
        ? {
            points: shape.points,
            name: this.base()?.name ?? null,
            metres: Math.round(lengthKm(shape.points) * 1000),
          }
        : null,
    );
  }

  private readonly words = (at: number): string => this.zone.dayTime(at);
}
