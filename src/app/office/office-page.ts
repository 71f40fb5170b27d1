import { Location } from '@angular/common';
import {
  ChangeDetectionStrategy,
  Component,
  computed,
  effect,
  inject,
  input,
  linkedSignal,
  signal,
} from '@angular/core';
import { MatTabsModule } from '@angular/material/tabs';
import { Session } from '../core/session';
import { AccountsPart } from './accounts-part';
import { AuditPart } from './audit-part';
import { RegionPart } from './region-part';
import { SettingsPart } from './settings-part';
import { StormsPart } from './storms-part';
import { TechniciansPart } from './technicians-part';

const PARTS = [
  { key: 'storms', name: 'Storms' },
  { key: 'settings', name: 'Settings' },
  { key: 'technicians', name: 'Technicians' },
  { key: 'accounts', name: 'Accounts' },
  { key: 'region', name: 'Region' },
  { key: 'trail', name: 'Audit trail' },
] as const;

type PartKey = (typeof PARTS)[number]['key'];
const OWNERS: readonly PartKey[] = ['accounts', 'region'];

/** Where the manager keeps the storms, the settings and the technicians, and the owner the accounts and the region. */
@Component({
  selector: 'thaw-office-page',
  imports: [
    AccountsPart,
    AuditPart,
    MatTabsModule,
    RegionPart,
    SettingsPart,
    StormsPart,
    TechniciansPart,
  ],
  templateUrl: './office-page.html',
  styleUrl: './office-page.scss',
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class OfficePage {
  private readonly location = inject(Location);
  private readonly session = inject(Session);

  /** From the address: `/office?part=settings`. */
  readonly part = input<string>();

  protected readonly parts = computed(() =>
    PARTS.filter(({ key }) => !OWNERS.includes(key) || this.session.role() === 'owner'),
  );
  protected readonly shown = linkedSignal<PartKey>(
    () => this.parts().find(({ key }) => key === this.part())?.key ?? 'storms',
  );
  /** A part stays once it was looked at: what was typed into it is still there after a look elsewhere. */
  protected readonly visited = signal<ReadonlySet<PartKey>>(new Set());

  constructor() {
    effect(() => {
      const shown = this.shown();
      this.visited.update((keys) => new Set([...keys, shown]));
    });
  }

  protected open(key: PartKey): void {
    this.shown.set(key);
    // Not by the router: a navigation would take the focus out of the tabs.
    this.location.replaceState('/office', `part=${key}`);
  }
}
