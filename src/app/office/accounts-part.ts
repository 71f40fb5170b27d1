import {
  ChangeDetectionStrategy,
  Component,
  computed,
  ElementRef,
  inject,
  signal,
} from '@angular/core';
import { MatButton } from '@angular/material/button';
import { MatDialog } from '@angular/material/dialog';
import type { ReplyOf } from '@shared/contract/http';
import type { UserDto } from '@shared/contract/office';
import type { TechnicianDto } from '@shared/contract/routes';
import { firstValueFrom } from 'rxjs';
import { Announce } from '../core/announce';
import { Api } from '../core/api';
import { ProblemError, problemWords } from '../core/problem-error';
import { Session } from '../core/session';
import { AccountForm } from './account-form';
import { type Confirmation, ConfirmDialog } from './confirm-dialog';
import { focusFirst } from './focus-first';
import { OrderId } from './order-id';
import { type NewPassword, PasswordDialog } from './password-dialog';
import { ROLE_WORDS } from './role-words';
import { StackedTable } from './stacked-table';

/** Who may sign in, and as what. Owners only. */
@Component({
  selector: 'thaw-accounts-part',
  imports: [AccountForm, MatButton, StackedTable],
  templateUrl: './accounts-part.html',
  styleUrl: './parts.scss',
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class AccountsPart {
  private readonly api = inject(Api);
  private readonly session = inject(Session);
  private readonly dialogs = inject(MatDialog);
  private readonly announce = inject(Announce);
  private readonly host = inject<ElementRef<HTMLElement>>(ElementRef);
  private readonly order = new OrderId();

  private readonly users = signal<readonly UserDto[] | null>(null);
  protected readonly technicians = signal<readonly TechnicianDto[]>([]);
  protected readonly trouble = signal<string | null>(null);
  protected readonly isBusy = signal(false);
  /** `new`, the id of the one that is changed, or nothing. */
  protected readonly edited = signal<string | null>(null);

  protected readonly ownId = computed(() => this.session.user()?.id);
  protected readonly taken = computed(
    () => new Set((this.users() ?? []).flatMap(({ technicianId }) => technicianId ?? [])),
  );
  protected readonly editedRow = computed(
    () => this.users()?.find(({ id }) => id === this.edited()) ?? null,
  );
  protected readonly rows = computed(() => {
    const names = new Map(this.technicians().map(({ id, name }) => [id, name]));
    return this.users()?.map((user) => ({
      user,
      role: ROLE_WORDS[user.role].name,
      technician: names.get(user.technicianId ?? '') ?? '',
      state: stateWords(user),
    }));
  });

  constructor() {
    void this.fetch();
  }

  protected edit(id: string): void {
    this.edited.set(id);
    focusFirst(this.host.nativeElement, 'input');
  }

  protected close(id: string | null): void {
    this.edited.set(null);
    focusFirst(this.host.nativeElement, `[data-of="${id ?? 'new'}"]`);
  }

  protected made({ user, password }: ReplyOf<'addUser'>): void {
    this.take(user);
    this.edited.set(null);
    this.tell(user, password);
  }

  protected changed(user: UserDto): void {
    this.take(user);
    this.announce.notice(`${user.name} is saved.`);
    this.close(user.id);
  }

  protected async setDisabled(user: UserDto, disabled: boolean): Promise<void> {
    const isSure =
      !disabled ||
      (await this.ask({
        title: `Disable ${user.name}?`,
        words: 'They are signed out everywhere at once and cannot sign in. What they did stays.',
        action: 'Disable the account',
      }));
    if (!isSure) return;
    const asked = { version: user.version, disabled };
    await this.attempt(async () => {
      const changed = await this.api.call('changeUser', {
        params: { userId: user.id },
        body: { commandId: this.order.idFor({ id: user.id, ...asked }), ...asked },
      });
      this.take(changed);
      this.announce.notice(`${user.name} ${disabled ? 'is disabled' : 'may sign in again'}.`);
    });
  }

  protected async renewPassword(user: UserDto): Promise<void> {
    const isSure = await this.ask({
      title: `A new password for ${user.name}?`,
      words: 'Their old password ends, and they are signed out everywhere at once.',
      action: 'Make a new password',
    });
    if (!isSure) return;
    const asked = { version: user.version };
    await this.attempt(async () => {
      const { user: changed, password } = await this.api.call('resetPassword', {
        params: { userId: user.id },
        body: { commandId: this.order.idFor({ renew: user.id, ...asked }), ...asked },
      });
      this.take(changed);
      this.tell(changed, password);
    });
  }

  private async attempt(work: () => Promise<void>): Promise<void> {
    this.trouble.set(null);
    this.isBusy.set(true);
    try {
      await work();
      this.order.done();
    } catch (error) {
      this.trouble.set(problemWords(error));
      // The row as it is now is shown; the words say that it has changed.
      if (error instanceof ProblemError && error.code === 'stale-version') {
        this.take(error.current as UserDto);
      }
    } finally {
      this.isBusy.set(false);
    }
  }

  private tell({ name, signInName, id }: UserDto, password: string): void {
    this.dialogs
      .open<PasswordDialog, NewPassword>(PasswordDialog, {
        data: { name, signInName, password },
        disableClose: true,
        maxWidth: '60ch',
      })
      .afterClosed()
      .subscribe(() => focusFirst(this.host.nativeElement, `[data-of="${id}"]`));
  }

  private take(user: UserDto): void {
    this.users.update((all) =>
      [...(all ?? []).filter(({ id }) => id !== user.id), user].sort((a, b) =>
        a.name.localeCompare(b.name),
      ),
    );
  }

  private async ask(data: Confirmation): Promise<boolean> {
    const dialog = this.dialogs.open<ConfirmDialog, Confirmation, true>(ConfirmDialog, {
      data,
      maxWidth: '52ch',
    });
    return (await firstValueFrom(dialog.afterClosed(), { defaultValue: undefined })) === true;
  }

  private async fetch(): Promise<void> {
    try {
      const [{ users }, { technicians }] = await Promise.all([
        this.api.call('listUsers'),
        this.api.call('listTechnicians'),
      ]);
      this.technicians.set(technicians);
      this.users.set(users);
    } catch (error) {
      this.trouble.set(problemWords(error));
    }
  }
}

function stateWords({ disabled, mustChangePassword }: UserDto): string {
  if (disabled) return 'disabled';
  return mustChangePassword ? 'first password not replaced yet' : 'active';
}
