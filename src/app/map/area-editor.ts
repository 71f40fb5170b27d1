import { computed, inject, Injectable, signal } from '@angular/core';
import type { AreaDto, AreaShape } from '@shared/contract/areas';
import type { LonLat } from '@shared/contract/common';
import { isInShape } from '@shared/domain/outage-shape';
import { Announce } from '../core/announce';
import { Api, newId } from '../core/api';
import { BoardStore } from '../core/board-store';
import { Clock } from '../core/clock';
import { Zone } from '../core/zone';
import { type AreaContent, changedOnly } from './area-content';
import { type AreaGround, groundOf, isSameShape, NO_GROUND, shapeOf } from './area-ground';
import { type AreaOverlap, overlapsWith } from './area-overlaps';
import {
  areaChanges,
  type AreaTimes,
  BLANK_TIMES,
  problemIn,
  setStillOut,
  timesOf,
  typeBack,
  typeOut,
} from './area-times';
import { Saving } from './saving';
import { savedWords } from './area-words';
import { addCorner, canClose, closed, crossesItself, type Outline, select } from './outline';

/**
 * An outage area while it is drawn or changed: its outline, its times, what went wrong with saving
 * it. What somebody else saves meanwhile is shown and overwrites nothing.
 */
@Injectable()
export class AreaEditor {
  private readonly api = inject(Api);
  private readonly board = inject(BoardStore);
  private readonly clock = inject(Clock);
  private readonly zone = inject(Zone);
  private readonly announce = inject(Announce);

  private readonly isOpenNow = signal(false);
  /** The area as the person saw it when the change began; `null` for a new one. */
  private readonly baseNow = signal<AreaDto | null>(null);
  private readonly groundNow = signal<AreaGround>(NO_GROUND);
  private readonly timesNow = signal<AreaTimes>(BLANK_TIMES);
  private readonly earlier = signal<readonly AreaGround[]>([]);
  private readonly saving = new Saving<AreaDto>(
    (current) => this.board.takeReply({ kind: 'areas', areas: [current], gone: [] }),
    () => this.isGoneNow.set(this.base() !== null),
  );
  private readonly isGoneNow = signal(false);
  private areaId = '';

  readonly isOpen = this.isOpenNow.asReadonly();
  readonly base = this.baseNow.asReadonly();
  readonly outline = computed(() => this.groundNow().outline);
  /** The ground as feeders or a file gave it, where no corners are moved; `null` while it is an outline. */
  readonly whole = computed(() => this.groundNow().whole);
  /** As it would be saved; `null` as long as it encloses nothing. */
  readonly ground = computed<AreaShape | null>(() => shapeOf(this.groundNow()));
  readonly times = this.timesNow.asReadonly();
  readonly isBusy = this.saving.isBusy;
  /** Why saving did not work. */
  readonly problem = this.saving.problem;
  readonly canMoveCorners = computed(() => {
    const whole = this.whole();
    return whole !== null && groundOf(whole).whole === null;
  });
  readonly canUndo = computed(() => this.earlier().length > 0);
  readonly isDrawing = computed(
    () => this.isOpen() && this.whole() === null && !this.outline().isClosed,
  );
  readonly crosses = computed(() => crossesItself(this.outline()));

  /** The area as somebody else has saved it since; `null` while nobody has. */
  readonly theirs = computed<AreaDto | null>(() => {
    const base = this.base();
    const now = base && this.board.areas().get(base.id);
    return now && now.version > base.version ? now : null;
  });
  readonly theirChanges = computed(() => {
    const base = this.base();
    const theirs = this.theirs();
    return base && theirs ? areaChanges(base, theirs, this.words) : [];
  });
  /** Somebody else has removed the area. */
  readonly isGone = computed(() => {
    const base = this.base();
    return this.isGoneNow() || (base !== null && !this.board.areas().has(base.id));
  });

  /** Open calls inside the outline as it is now. */
  readonly callsInside = computed(() => {
    const shape = this.ground();
    if (!shape || !this.isOpen()) return 0;
    return this.board.openCalls().filter(({ address }) => {
      const { lonLat } = address;
      return lonLat !== null && isInShape(lonLat, shape);
    }).length;
  });

  /** Other areas that cover part of this one; while the times are not known, nobody can say who wins. */
  readonly overlaps = computed<readonly AreaOverlap[]>(() => {
    const shape = this.ground();
    const { outAt, backAt, isStillOut } = this.times();
    if (!shape || !this.isOpen() || this.isDrawing() || outAt === null) return [];
    const times = { outAt, backAt: isStillOut ? null : backAt };
    return overlapsWith(shape, times, this.board.areas().values(), this.base()?.id ?? null);
  });

  draw(): void {
    this.start(null, NO_GROUND, BLANK_TIMES);
  }

  change(area: AreaDto): void {
    this.start(area, groundOf(area.shape), timesOf(area, this.words));
  }

  /** A new area whose ground is known already, from a file. */
  begin(shape: AreaShape, times: Partial<AreaTimes>): void {
    this.start(null, groundOf(shape), { ...BLANK_TIMES, ...times });
  }

  /** The ground as a whole, from feeders; `null` takes it away again. */
  setGround(whole: AreaShape | null): void {
    this.earlier.update((steps) => [...steps, this.groundNow()]);
    this.groundNow.set({ ...NO_GROUND, whole });
  }

  /** From now on the ground is an outline whose corners are moved. */
  moveCorners(): void {
    const whole = this.whole();
    if (!whole || !this.canMoveCorners()) return;
    this.earlier.update((steps) => [...steps, this.groundNow()]);
    this.groundNow.set(groundOf(whole));
  }

  /** Stops without saving. For a few seconds it can be taken up again where it was. */
  cancel(): void {
    const left = {
      base: this.base(),
      ground: this.groundNow(),
      times: this.times(),
      areaId: this.areaId,
    };
    const isWorthKeeping = this.canUndo();
    this.close();
    if (!isWorthKeeping) return;
    this.announce.notice('The outage area was not saved.', {
      label: 'Go on',
      run: () => {
        this.start(left.base, left.ground, left.times);
        this.areaId = left.areaId;
      },
    });
  }

  private close(): void {
    this.isOpenNow.set(false);
    this.baseNow.set(null);
    this.groundNow.set(NO_GROUND);
    this.earlier.set([]);
  }

  /** Takes a step with the outline that can be undone. */
  shape(step: (outline: Outline) => Outline): void {
    const before = this.groundNow();
    const outline = step(before.outline);
    if (outline === before.outline) return;
    this.earlier.update((steps) => [...steps, before]);
    this.groundNow.set({ ...before, outline });
  }

  /** The middle of a drag: shown, and undone together with its beginning. */
  drag(step: (outline: Outline) => Outline): void {
    this.groundNow.update((ground) => ({ ...ground, outline: step(ground.outline) }));
  }

  select(index: number | null): void {
    this.groundNow.update((ground) => ({ ...ground, outline: select(ground.outline, index) }));
  }

  undo(): void {
    const last = this.earlier().at(-1);
    if (!last) return;
    this.earlier.update((steps) => steps.slice(0, -1));
    this.groundNow.set(last);
  }

  addCorner(corner: LonLat): void {
    this.shape((outline) => addCorner(outline, corner));
  }

  /** Ends the drawing of the outline; the times come next. */
  finish(): void {
    if (!canClose(this.outline())) return;
    this.shape(closed);
    this.announce.say('The outline is finished. Give it a name and its times.');
  }

  rename(name: string): void {
    this.timesNow.update((times) => ({ ...times, name }));
  }
  typeOut(text: string): void {
    this.timesNow.update((times) => typeOut(times, text, this.clock.exact(), this.zone.name()));
  }
  typeBack(text: string): void {
    this.timesNow.update((times) => typeBack(times, text, this.clock.exact(), this.zone.name()));
  }
  setStillOut(isStillOut: boolean): void {
    this.timesNow.update((times) => setStillOut(times, isStillOut));
  }

  /** Goes on with the person's own changes; what they did not touch becomes the other's. */
  keepMine(): void {
    const base = this.base();
    const theirs = this.theirs();
    if (!base || !theirs) return;
    const mine = timesOf(base, this.words);
    const other = timesOf(theirs, this.words);
    this.timesNow.update((times) => ({
      ...times,
      ...(times.name === mine.name ? { name: other.name } : {}),
      ...(times.outAt === mine.outAt ? { outAt: other.outAt, outText: other.outText } : {}),
      ...(times.backAt === mine.backAt && times.isStillOut === mine.isStillOut
        ? { backAt: other.backAt, backText: other.backText, isStillOut: other.isStillOut }
        : {}),
    }));
    if (isSameShape(this.ground(), base.shape)) this.groundNow.set(groundOf(theirs.shape));
    this.baseNow.set(theirs);
    this.saving.say('');
  }

  /** Drops the person's own changes for what the other one saved. */
  takeTheirs(): void {
    const theirs = this.theirs();
    if (theirs) this.change(theirs);
  }

  /** The area was removed by somebody else; the work goes on as a new one. */
  keepAsNew(): void {
    this.baseNow.set(null);
    this.isGoneNow.set(false);
    this.areaId = newId();
    this.saving.say('');
  }

  async save(): Promise<void> {
    const shape = this.ground();
    const times = this.times();
    const problem = !shape || this.isDrawing() ? OPEN_OUTLINE : problemIn(times);
    this.saving.say(this.crosses() ? CROSSING_OUTLINE : problem);
    if (this.problem() !== '' || !shape || times.outAt === null || this.isBusy()) return;
    if (this.theirs()) {
      this.saving.say('Somebody else changed this area. Decide first whose version stays.');
      return;
    }
    const content = {
      name: times.name.trim(),
      shape,
      outAt: times.outAt,
      backAt: times.isStillOut ? null : times.backAt,
    };
    await this.saving.run(async () => {
      const inside = this.callsInside();
      const area = await this.send(content);
      this.board.takeReply({ kind: 'areas', areas: [area], gone: [] });
      this.close();
      this.announce.notice(savedWords(area, inside));
    });
  }

  async remove(): Promise<void> {
    const base = this.base();
    if (!base || this.isBusy()) return;
    await this.saving.run(async () => {
      await this.api.call('removeArea', {
        params: { areaId: base.id },
        body: {
          commandId: this.saving.commandFor(`remove ${base.version}`),
          version: base.version,
        },
      });
      this.board.takeReply({ kind: 'areas', areas: [], gone: [base.id] });
      this.close();
      this.announce.notice(
        `${base.name} is removed. Calls that followed it keep the times that they had, unless another area is around them.`,
      );
    });
  }

  private send(content: AreaContent): Promise<AreaDto> {
    const base = this.base();
    if (!base) {
      const body = { areaId: this.areaId, ...content };
      const stormId = this.board.storm()?.id ?? '';
      const commandId = this.saving.commandFor(JSON.stringify(body));
      return this.api.call('drawArea', { params: { stormId }, body: { ...body, commandId } });
    }
    const body = { ...changedOnly(base, content), version: base.version };
    const commandId = this.saving.commandFor(JSON.stringify(body));
    return this.api.call('changeArea', {
      params: { areaId: base.id },
      body: { ...body, commandId },
    });
  }

  private start(base: AreaDto | null, ground: AreaGround, times: AreaTimes): void {
    this.areaId = base?.id ?? newId();
    this.baseNow.set(base);
    this.groundNow.set(ground);
    this.timesNow.set(times);
    this.earlier.set([]);
    this.saving.say('');
    this.isGoneNow.set(false);
    this.isOpenNow.set(true);
  }

  private readonly words = (at: number): string => this.zone.dayTime(at);
}

const OPEN_OUTLINE = 'Finish the outline first: it needs three corners.';
const CROSSING_OUTLINE = 'The outline crosses itself. Move a corner until it does not.';
