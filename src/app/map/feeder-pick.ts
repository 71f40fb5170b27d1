import { computed, inject, Injectable, signal } from '@angular/core';
import type { AreaShape } from '@shared/contract/areas';
import type { LonLat } from '@shared/contract/common';
import type { FeederDto } from '@shared/contract/feeders';
import { isInShape } from '@shared/domain/outage-shape';
import { Announce } from '../core/announce';
import { Api } from '../core/api';
import { ProblemError, problemWords } from '../core/problem-error';
import { Session } from '../core/session';
import { AreaEditor } from './area-editor';

/** An outage area made of the feeders that failed: picked on the map or from the list. */
@Injectable()
export class FeederPick {
  private readonly api = inject(Api);
  private readonly announce = inject(Announce);
  private readonly editor = inject(AreaEditor);
  private readonly session = inject(Session);

  private readonly wanted = signal(false);
  private readonly known = signal<readonly FeederDto[] | null>(null);
  private readonly chosenNow = signal<ReadonlySet<string>>(new Set());
  private readonly trouble = signal('');
  private asked = 0;
  /** Which region the known feeders are of. */
  private knownOf: string | undefined;
  /** The name that was put in for the person; one of their own stays. */
  private suggested = '';

  /** Only a new area is made of feeders; a stored one has its ground. */
  readonly isOn = computed(() => this.wanted() && this.editor.isOpen() && !this.editor.base());
  /** `null` until they have come. */
  readonly feeders = this.known.asReadonly();
  readonly chosenIds = this.chosenNow.asReadonly();
  readonly problem = this.trouble.asReadonly();
  readonly chosen = computed(
    () => this.known()?.filter(({ id }) => this.chosenNow().has(id)) ?? [],
  );

  /** Begins a new area of feeders. */
  start(): void {
    this.chosenNow.set(new Set());
    this.suggested = '';
    this.trouble.set('');
    this.wanted.set(true);
    this.editor.draw();
    void this.load();
  }

  /** The ground stays as it is; corners are drawn or moved from now on. */
  stop(): void {
    this.wanted.set(false);
  }

  at(place: LonLat): FeederDto | null {
    return this.known()?.find(({ polygons }) => isInShape(place, polygons)) ?? null;
  }

  toggle(feeder: FeederDto): void {
    const chosen = new Set(this.chosenNow());
    const isTaken = !chosen.delete(feeder.id);
    if (isTaken) chosen.add(feeder.id);
    this.chosenNow.set(chosen);
    this.announce.say(`${feeder.name} ${isTaken ? 'is in the area' : 'is taken out again'}.`);
    this.suggestName();
    void this.join();
  }

  private async load(): Promise<void> {
    const region = this.session.region()?.tilesUrl;
    if (this.known() && this.knownOf === region) return;
    this.known.set(null);
    try {
      this.known.set((await this.api.call('feeders')).feeders);
      this.knownOf = region;
    } catch (error) {
      this.failed(error);
    }
  }

  /** The latest choice wins, whichever answer comes last. */
  private async join(): Promise<void> {
    const turn = ++this.asked;
    const ids = [...this.chosenNow()];
    this.trouble.set('');
    try {
      const shape = ids.length > 0 ? await this.shapeOf(ids) : null;
      if (turn === this.asked && this.isOn()) this.editor.setGround(shape);
    } catch (error) {
      if (turn === this.asked) this.failed(error);
    }
  }

  private async shapeOf(ids: readonly string[]): Promise<AreaShape> {
    return (await this.api.call('feederShape', { query: { ids: ids.join(',') } })).shape;
  }

  private suggestName(): void {
    const names = this.chosen().map(({ name }) => name);
    const suggestion = namesInWords(names);
    if (this.editor.times().name.trim() !== this.suggested) return;
    this.suggested = suggestion;
    this.editor.rename(suggestion);
  }

  private failed(error: unknown): void {
    if (!(error instanceof ProblemError)) throw error;
    this.trouble.set(problemWords(error));
  }
}

/** "Heron 2", "Heron 2 and Pell 1", "Heron 2, Heron 3 and 4 more". */
export function namesInWords(names: readonly string[]): string {
  if (names.length <= 2) return names.join(' and ');
  if (names.length === 3) return `${names[0]}, ${names[1]} and ${names[2]}`;
  return `${names[0]}, ${names[1]} and ${names.length - 2} more`;
}
