import { ChangeDetectionStrategy, Component, computed, inject, signal } from '@angular/core';
import { MatButton } from '@angular/material/button';
import { MatDialog } from '@angular/material/dialog';
import { MatIcon } from '@angular/material/icon';
import { MatProgressBar } from '@angular/material/progress-bar';
import { RouterLink } from '@angular/router';
import type { KeptRegion } from '@shared/contract/regions';
import { firstValueFrom } from 'rxjs';
import { BoardStore } from '../core/board-store';
import { type Confirmation, ConfirmDialog } from './confirm-dialog';
import { RegionImportForm } from './region-import-form';
import { RegionModel } from './region-model';
import { RegionReport } from './region-report';
import { contents, counted, percent, stepWords, switchWords } from './region-words';
import { StackedTable } from './stacked-table';

/** Which county the application works in: the one in use, those that are kept, and the next. Owners only. */
@Component({
  selector: 'thaw-region-part',
  imports: [
    MatButton,
    MatIcon,
    MatProgressBar,
    RegionImportForm,
    RegionReport,
    RouterLink,
    StackedTable,
  ],
  providers: [RegionModel],
  templateUrl: './region-part.html',
  styleUrls: ['./parts.scss', './region-part.scss'],
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class RegionPart {
  protected readonly model = inject(RegionModel);
  private readonly board = inject(BoardStore);
  private readonly dialogs = inject(MatDialog);

  /** The region whose report is open. */
  protected readonly opened = signal<string | null>(null);

  protected readonly rows = computed(() =>
    this.model.all()?.regions.map((region) => ({
      region,
      contents: contents(region),
      state: region.isInUse ? 'in use' : region.isOutdated ? 'import it again' : 'kept',
    })),
  );
  protected readonly progress = computed(() => {
    const running = this.model.import();
    return running?.state === 'running'
      ? { ...running, words: `${stepWords(running)}: ${percent(running.share)} of the import` }
      : null;
  });
  /** How the last import ended, until the region it made is in use. */
  protected readonly ended = computed(() => {
    const last = this.model.import();
    if (!last || last.state === 'running') return null;
    const made = this.model.all()?.regions.find(({ key }) => key === last.regionKey) ?? null;
    return last.state === 'done' && (!made || made.isInUse) ? null : { ...last, made };
  });
  protected readonly change = computed(() => {
    const change = this.model.change();
    return (
      change && {
        ...change,
        isLocating: change.state === 'locating',
        share: change.total === 0 ? 1 : change.done / change.total,
        words: switchWords(change),
      }
    );
  });
  protected readonly outside = computed(() => {
    const all = this.model.all();
    if (!all) return [];
    const { techniciansOutside, areasOutside } = all;
    return [
      ...(techniciansOutside.length > 0
        ? [
            `${counted(techniciansOutside.length, 'technician starts', 'technicians start')} outside of this region: ${techniciansOutside.join(', ')}. Their drives count from there; change where they start under Technicians.`,
          ]
        : []),
      ...(areasOutside.length > 0
        ? [
            `${counted(areasOutside.length, 'outage area lies', 'outage areas lie')} outside of this region: ${areasOutside.join(', ')}. They are kept as they are.`,
          ]
        : []),
    ];
  });

  protected toggle(key: string): void {
    this.opened.update((open) => (open === key ? null : key));
  }

  protected async use(region: KeptRegion): Promise<void> {
    const calls = this.board.calls().size;
    const words = [
      `All screens change to ${region.name} at once: map, addresses and time zone.`,
      ...(calls > 0
        ? [
            `${counted(calls, 'call')} of the open storm, each with its address, ${calls === 1 ? 'is' : 'are'} looked up there; what is not found keeps its place and is listed here.`,
          ]
        : []),
      'You can switch back.',
    ].join(' ');
    if (await this.ask({ title: `Switch to ${region.name}?`, words, action: 'Switch' }))
      await this.model.use(region);
  }

  protected async remove(region: KeptRegion): Promise<void> {
    const isSure = await this.ask({
      title: `Remove ${region.name}?`,
      words: 'Its map and its addresses go. To use it again, it has to be imported again.',
      action: 'Remove the region',
    });
    if (isSure) await this.model.remove(region);
  }

  private async ask(data: Confirmation): Promise<boolean> {
    const dialog = this.dialogs.open<ConfirmDialog, Confirmation, true>(ConfirmDialog, {
      data,
      maxWidth: '52ch',
    });
    return (await firstValueFrom(dialog.afterClosed(), { defaultValue: undefined })) === true;
  }
}
