import { computed, inject, Injectable, signal } from '@angular/core';
import type { AreaDto } from '@shared/contract/areas';
import type { Instant } from '@shared/domain/instant';
import { isInShape, type OutageShape, shapesOverlap } from '@shared/domain/outage-shape';
import { Announce } from '../core/announce';
import { Api, newId } from '../core/api';
import { BoardStore } from '../core/board-store';
import { Clock } from '../core/clock';
import { ProblemError, problemWords } from '../core/problem-error';
import { Session } from '../core/session';
import { Zone } from '../core/zone';
import { shapeWords } from './area-ground';
import { type AreaTimes, BLANK_TIMES, typeBack, typeOut } from './area-times';
import { areaTimesWords } from './area-words';
import { type FileArea, MOST_FILE_BYTES, readGeoJson } from './geojson-areas';

/** An area of the file on its way into the storm. */
export interface FileRow {
  /** Its id from the start: saving it twice makes it once. */
  readonly areaId: string;
  readonly area: FileArea;
  readonly isChosen: boolean;
  readonly isSaved: boolean;
  /** Why it was not saved. */
  readonly problem: string;
}

/** Outage areas from a file, until they are saved: what was read, what is chosen, what went wrong. */
@Injectable()
export class FileImport {
  private readonly api = inject(Api);
  private readonly board = inject(BoardStore);
  private readonly clock = inject(Clock);
  private readonly session = inject(Session);
  private readonly zone = inject(Zone);
  private readonly announce = inject(Announce);

  private readonly rowsNow = signal<readonly FileRow[]>([]);
  private readonly timesNow = signal<AreaTimes>(BLANK_TIMES);
  private readonly nameNow = signal('');
  private readonly skippedNow = signal<readonly string[]>([]);
  private readonly trouble = signal('');
  private readonly saveTrouble = signal('');
  private readonly pending = signal(false);
  private readonly commands = new Map<string, string>();

  readonly rows = this.rowsNow.asReadonly();
  readonly name = this.nameNow.asReadonly();
  readonly skipped = this.skippedNow.asReadonly();
  /** Why the file cannot be read. */
  readonly problem = this.trouble.asReadonly();
  readonly saveProblem = this.saveTrouble.asReadonly();
  readonly isBusy = this.pending.asReadonly();
  /** For areas whose own times the file does not tell. */
  readonly times = this.timesNow.asReadonly();

  readonly chosen = computed(() => this.rows().filter((row) => row.isChosen && !row.isSaved));
  readonly needsOut = computed(() => this.chosen().some(({ area }) => area.outAt === null));
  readonly summary = computed(() => {
    const count = this.rows().length;
    return count === 1 ? '1 area' : `${count} areas`;
  });

  async open(file: File): Promise<void> {
    this.clear();
    this.nameNow.set(file.name);
    if (file.size > MOST_FILE_BYTES) {
      const size = (file.size / 1e6).toFixed(1);
      this.trouble.set(
        `${file.name} has ${size} MB; at most ${MOST_FILE_BYTES / 1e6} MB are read.`,
      );
      return;
    }
    const text = await file.text();
    const reading = readGeoJson(text, file.name, this.clock.exact(), this.zone.name());
    if (reading.kind === 'unreadable') {
      this.trouble.set(`${file.name}: ${reading.why}`);
      return;
    }
    const isHere = this.isInRegion();
    const here = reading.areas.filter(({ shape }) => isHere(shape));
    const away = reading.areas.length - here.length;
    this.skippedNow.set([
      ...reading.skipped,
      ...(away === 0
        ? []
        : [`${away === 1 ? '1 area lies' : `${away} areas lie`} outside the region`]),
    ]);
    if (here.length === 0) {
      this.trouble.set(`${file.name}: none of its areas lies in the region.`);
      return;
    }
    this.rowsNow.set(
      here.map((area) => ({
        areaId: newId(),
        area,
        isChosen: true,
        isSaved: false,
        problem: '',
      })),
    );
  }

  clear(): void {
    this.rowsNow.set([]);
    this.skippedNow.set([]);
    this.timesNow.set(BLANK_TIMES);
    this.nameNow.set('');
    this.trouble.set('');
    this.saveTrouble.set('');
  }

  choose(areaId: string): void {
    this.change(areaId, (row) => ({ isChosen: !row.isChosen }));
  }

  typeOut(text: string): void {
    this.timesNow.update((times) => typeOut(times, text, this.clock.exact(), this.zone.name()));
  }

  typeBack(text: string): void {
    this.timesNow.update((times) => typeBack(times, text, this.clock.exact(), this.zone.name()));
  }

  timesOf({ area }: FileRow): string {
    const { outAt, backAt } = this.timesFor(area);
    if (outAt === null) return 'The file does not say when the power went';
    return areaTimesWords({ outAt, backAt }, this.clock.now(), this.zone.name());
  }

  groundOf({ area: { shape } }: FileRow): string {
    const inside = this.board
      .openCalls()
      .filter(({ address }) => address.lonLat !== null && isInShape(address.lonLat, shape)).length;
    return `${inside === 1 ? '1 open call' : `${inside} open calls`} inside; ${shapeWords(shape)}`;
  }

  /** @returns whether all that was chosen has been saved; what was not says why */
  async save(): Promise<boolean> {
    this.saveTrouble.set(this.timesProblem());
    if (this.saveProblem() !== '' || this.pending()) return false;
    this.pending.set(true);
    let saved = 0;
    for (const row of this.chosen()) {
      const problem = await this.saveOne(row);
      this.change(row.areaId, () => ({ problem, isSaved: problem === '' }));
      if (problem === '') saved++;
    }
    this.pending.set(false);
    const left = this.chosen().length;
    const done = saved === 1 ? '1 area is saved' : `${saved} areas are saved`;
    if (left === 0)
      this.announce.notice(`${done}. Calls inside follow unless they have own times.`);
    else this.saveTrouble.set(`${done}; ${left} could not be. The reasons stand beside them.`);
    return left === 0;
  }

  private timesProblem(): string {
    if (!this.needsOut()) return '';
    const { outAt, outTrouble, backAt, backTrouble } = this.times();
    if (outTrouble !== '') return `Power went: ${outTrouble}`;
    if (outAt === null) return 'When did the power go, where the file does not say?';
    if (backTrouble !== '') return `Came back: ${backTrouble}`;
    return backAt !== null && backAt <= outAt ? 'It came back before it went.' : '';
  }

  private timesFor(area: FileArea): { outAt: Instant | null; backAt: Instant | null } {
    if (area.outAt !== null) return { outAt: area.outAt, backAt: area.backAt };
    const { outAt, backAt } = this.times();
    return { outAt, backAt: area.backAt ?? backAt };
  }

  /** @returns why not, or nothing */
  private async saveOne({ areaId, area }: FileRow): Promise<string> {
    const { outAt, backAt } = this.timesFor(area);
    if (outAt === null) return 'When did the power go?';
    const content = { areaId, name: area.name, shape: area.shape, outAt, backAt };
    try {
      const stored: AreaDto = await this.api.call('drawArea', {
        params: { stormId: this.board.storm()?.id ?? '' },
        body: { commandId: this.commandFor(content), ...content },
      });
      this.board.takeReply({ kind: 'areas', areas: [stored], gone: [] });
      return '';
    } catch (error) {
      if (!(error instanceof ProblemError)) throw error;
      return problemWords(error);
    }
  }

  /** A repeat of the same is the same command; with other times it is another one. */
  private commandFor(content: object): string {
    const key = JSON.stringify(content);
    const id = this.commands.get(key) ?? newId();
    this.commands.set(key, id);
    return id;
  }

  private change(areaId: string, by: (row: FileRow) => Partial<FileRow>): void {
    this.rowsNow.update((rows) =>
      rows.map((row) => (row.areaId === areaId ? { ...row, ...by(row) } : row)),
    );
  }

  private isInRegion(): (shape: OutageShape) => boolean {
    const [west, south, east, north] = this.session.region()?.bbox ?? [-180, -90, 180, 90];
    const region: OutageShape = [
      [
        [
          [west, south],
          [east, south],
          [east, north],
          [west, north],
          [west, south],
        ],
      ],
    ];
    return (shape) => shapesOverlap(shape, region);
  }
}
