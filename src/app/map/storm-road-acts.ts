import { inject, Injectable } from '@angular/core';
import type { StormRoadDto } from '@shared/contract/storm-roads';
import { Announce } from '../core/announce';
import { Api, newId } from '../core/api';
import { BoardStore } from '../core/board-store';
import { ProblemError, problemWords } from '../core/problem-error';

/** What is done with a storm road as it stands: confirmed, lifted, or its latest change taken back. */
@Injectable()
export class StormRoadActs {
  private readonly api = inject(Api);
  private readonly board = inject(BoardStore);
  private readonly announce = inject(Announce);

  confirm(road: StormRoadDto): Promise<void> {
    return this.change('confirmStormRoad', road, 'is confirmed');
  }

  lift(road: StormRoadDto): Promise<void> {
    return this.change('liftStormRoad', road, 'is lifted');
  }

  async undo(road: StormRoadDto): Promise<void> {
    await this.tell(async () => {
      const { road: before } = await this.api.call('undoStormRoad', {
        params: { stormRoadId: road.id },
        body: { commandId: newId(), version: road.version },
      });
      this.board.takeReply({
        kind: 'storm-roads',
        roads: before ? [before] : [],
        gone: before ? [] : [road.id],
      });
      this.announce.notice(`The latest change of ${road.name} is taken back.`);
    });
  }

  /** Says that a road has changed, with the way back. */
  noticeOf(road: StormRoadDto, what: string): void {
    this.announce.notice(`${road.name} ${what}. Routes and arrival times follow.`, {
      label: 'Undo',
      run: () => void this.undo(road),
    });
  }

  private change(
    command: 'confirmStormRoad' | 'liftStormRoad',
    road: StormRoadDto,
    what: string,
  ): Promise<void> {
    return this.tell(async () => {
      const changed = await this.api.call(command, {
        params: { stormRoadId: road.id },
        body: { commandId: newId(), version: road.version },
      });
      this.board.takeReply({ kind: 'storm-roads', roads: [changed], gone: [] });
      this.noticeOf(changed, what);
    });
  }

  private async tell(work: () => Promise<void>): Promise<void> {
    try {
      await work();
    } catch (error) {
      if (!(error instanceof ProblemError)) throw error;
      this.announce.notice(problemWords(error));
    }
  }
}
