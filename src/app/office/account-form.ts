import {
  ChangeDetectionStrategy,
  Component,
  computed,
  effect,
  inject,
  input,
  output,
  signal,
  untracked,
} from '@angular/core';
import { toSignal } from '@angular/core/rxjs-interop';
import { FormControl, FormGroup, ReactiveFormsModule } from '@angular/forms';
import { MatButton } from '@angular/material/button';
import { MatFormFieldModule } from '@angular/material/form-field';
import { MatIcon } from '@angular/material/icon';
import { MatInput } from '@angular/material/input';
import { MatSelectModule } from '@angular/material/select';
import type { Role } from '@shared/contract/common';
import type { ReplyOf } from '@shared/contract/http';
import type { UserDto } from '@shared/contract/office';
import type { TechnicianDto } from '@shared/contract/routes';
import { Api, newId } from '../core/api';
import { ProblemError, problemWords } from '../core/problem-error';
import { filled, inWords, showFaults } from './form-words';
import { OrderId } from './order-id';
import { ROLE_WORDS } from './role-words';

/** Makes an account, or changes who somebody is. */
@Component({
  selector: 'thaw-account-form',
  imports: [MatButton, MatFormFieldModule, MatIcon, MatInput, MatSelectModule, ReactiveFormsModule],
  templateUrl: './account-form.html',
  styleUrl: './parts.scss',
  styles: ':host { padding-block: 0; }',
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class AccountForm {
  private readonly api = inject(Api);
  private readonly order = new OrderId();
  private readonly ownId = newId();

  /** `null` makes one. */
  readonly user = input.required<UserDto | null>();
  /** Nobody takes away their own access. */
  readonly isSelf = input(false);
  readonly technicians = input.required<readonly TechnicianDto[]>();
  /** Technicians whose account it is already. */
  readonly taken = input.required<ReadonlySet<string>>();
  readonly made = output<ReplyOf<'addUser'>>();
  readonly changed = output<UserDto>();
  readonly closed = output();

  protected readonly roles = (Object.keys(ROLE_WORDS) as Role[]).map((role) => ({
    role,
    ...ROLE_WORDS[role],
  }));
  protected readonly form = new FormGroup({
    name: new FormControl('', { nonNullable: true, validators: filled('A name is needed.') }),
    signInName: new FormControl('', {
      nonNullable: true,
      validators: inWords<string>((text) =>
        /^\S+@\S+\.\S+$/.test(text.trim()) ? null : 'An e-mail address is needed.',
      ),
    }),
    role: new FormControl<Role>('dispatcher', { nonNullable: true }),
    technicianId: new FormControl<string | null>(null),
  });
  private readonly base = signal<UserDto | null>(null);
  protected readonly title = computed(() => this.base()?.name ?? 'New account');
  protected readonly overtaken = signal(false);
  protected readonly trouble = signal<string | null>(null);
  protected readonly isBusy = signal(false);
  protected readonly role = toSignal(this.form.controls.role.valueChanges, {
    initialValue: this.form.controls.role.value,
  });
  protected readonly roleWords = computed(() => ROLE_WORDS[this.role()]);
  protected readonly roleHint = computed(() =>
    this.isSelf() ? 'Nobody changes their own role.' : this.roleWords().does,
  );
  protected readonly choiceHint = computed(() =>
    this.choices().length === 0 ? 'Add the technician first.' : 'Those without an account.',
  );
  protected readonly choices = computed(() =>
    this.technicians().filter(
      ({ id, active }) => id === this.base()?.technicianId || (active && !this.taken().has(id)),
    ),
  );

  constructor() {
    effect(() => {
      const user = this.user();
      untracked(() => {
        if (user && user.id !== this.base()?.id) this.fill(user);
      });
    });
    effect(() => {
      const { role } = this.form.controls;
      if (this.isSelf()) role.disable();
      else role.enable();
    });
  }

  protected async save(): Promise<void> {
    if (this.isBusy()) return;
    this.trouble.set(null);
    const { technicianId } = this.form.controls;
    const told = this.told();
    technicianId.setErrors(
      told.role === 'technician' && told.technicianId === null
        ? { words: 'Choose the technician whose phone this is.' }
        : null,
    );
    this.form.markAllAsTouched();
    if (this.form.invalid) return;
    this.isBusy.set(true);
    try {
      await this.send(told);
      this.order.done();
    } catch (error) {
      this.refused(error);
    } finally {
      this.isBusy.set(false);
    }
  }

  private async send(told: ReturnType<AccountForm['told']>): Promise<void> {
    const base = this.base();
    if (!base) {
      const asked = { userId: this.ownId, ...told };
      const made = await this.api.call('addUser', {
        body: { commandId: this.order.idFor(asked), ...asked },
      });
      this.made.emit(made);
      return;
    }
    const { name, role, technicianId } = told;
    const asked = {
      version: base.version,
      ...(name === base.name ? {} : { name }),
      ...(role === base.role ? {} : { role }),
      ...(technicianId === base.technicianId ? {} : { technicianId }),
    };
    const user = await this.api.call('changeUser', {
      params: { userId: base.id },
      body: { commandId: this.order.idFor(asked), ...asked },
    });
    this.changed.emit(user);
  }

  private refused(error: unknown): void {
    if (error instanceof ProblemError && error.code === 'stale-version') {
      // What was typed stays; the next save goes by the account as it is now.
      this.base.set(error.current as UserDto);
      this.overtaken.set(true);
    } else if (!(error instanceof ProblemError) || !showFaults(this.form, error, OWN_WORDS)) {
      this.trouble.set(problemWords(error));
    }
  }

  protected nowWords(): string {
    const base = this.base();
    if (!base) return '';
    const state = base.disabled ? ', disabled' : '';
    return `${base.name}, ${ROLE_WORDS[base.role].name.toLowerCase()}${state}`;
  }

  private told() {
    const { name, signInName, role, technicianId } = this.form.getRawValue();
    return {
      name: name.trim(),
      signInName: signInName.trim().toLowerCase(),
      role,
      technicianId: role === 'technician' ? technicianId : null,
    };
  }

  private fill(user: UserDto): void {
    this.base.set(user);
    const { name, signInName, role, technicianId } = user;
    this.form.reset({ name, signInName, role, technicianId });
    this.form.controls.signInName.disable();
  }
}

const OWN_WORDS: Readonly<Record<string, string>> = {
  name: 'A name of at most 80 characters is needed.',
  signInName: 'An e-mail address of at most 120 characters is needed.',
};
