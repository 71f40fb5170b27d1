import { ChangeDetectionStrategy, Component, computed, DestroyRef, inject } from '@angular/core';
import { MatIconButton } from '@angular/material/button';
import { MatDialog } from '@angular/material/dialog';
import { MatDivider } from '@angular/material/divider';
import { MatIcon } from '@angular/material/icon';
import { MatMenu, MatMenuItem, MatMenuTrigger } from '@angular/material/menu';
import { RouterLink } from '@angular/router';
import type { Role } from '@shared/contract/common';
import { firstValueFrom } from 'rxjs';
import { Announce } from '../core/announce';
import { Drafts } from '../core/drafts';
import { Keys } from '../core/keys';
import { problemWords } from '../core/problem-error';
import { Session } from '../core/session';
import { Theme, type ThemeChoice } from '../core/theme';

const ROLE_WORDS: Readonly<Record<Role, string>> = {
  dispatcher: 'Dispatcher',
  technician: 'Technician',
  manager: 'Manager',
  owner: 'Owner',
};

/** What concerns the person, not the storm: theme, keys, password, signing out. */
@Component({
  selector: 'thaw-account-menu',
  imports: [MatDivider, MatIcon, MatIconButton, MatMenu, MatMenuItem, MatMenuTrigger, RouterLink],
  templateUrl: './account-menu.html',
  styleUrl: './account-menu.scss',
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class AccountMenu {
  private readonly dialogs = inject(MatDialog);
  private readonly drafts = inject(Drafts);
  private readonly announce = inject(Announce);
  protected readonly session = inject(Session);
  protected readonly keys = inject(Keys);
  protected readonly theme = inject(Theme);

  protected readonly roleWords = computed(() => {
    const role = this.session.role();
    return role ? ROLE_WORDS[role] : '';
  });
  protected readonly themes: readonly { choice: ThemeChoice; words: string }[] = [
    { choice: 'system', words: 'Light or dark as the system is' },
    { choice: 'light', words: 'Light' },
    { choice: 'dark', words: 'Dark' },
  ];

  constructor() {
    this.keys.register(
      [{ keys: '?', does: 'Show the keys', scope: 'Everywhere', run: () => void this.showKeys() }],
      inject(DestroyRef),
    );
  }

  protected async showKeys(): Promise<void> {
    if (this.dialogs.openDialogs.length > 0) return;
    const { KeysSheet } = await import('./keys-sheet');
    this.dialogs.open(KeysSheet, { width: '720px', maxWidth: '94vw' });
  }

  protected async signOut(): Promise<void> {
    try {
      if (!this.drafts.hasAny()) return await this.session.signOut();
      const { SignOutDialog } = await import('./sign-out-dialog');
      const asked = this.dialogs.open<object, undefined, 'clear-drafts' | 'keep-drafts'>(
        SignOutDialog,
      );
      const decision = await firstValueFrom(asked.afterClosed());
      if (decision) await this.session.signOut(decision);
    } catch (error) {
      this.announce.notice(problemWords(error));
    }
  }
}
