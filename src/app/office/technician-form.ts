import {
  ChangeDetectionStrategy,
  Component,
  computed,
  effect,
  ElementRef,
  inject,
  input,
  output,
  signal,
  untracked,
} from '@angular/core';
import { FormControl, FormGroup, ReactiveFormsModule } from '@angular/forms';
import { MatButton, MatIconButton } from '@angular/material/button';
import { MatCheckbox } from '@angular/material/checkbox';
import { MatFormFieldModule } from '@angular/material/form-field';
import { MatIcon } from '@angular/material/icon';
import { MatInput } from '@angular/material/input';
import type { TechnicianDto } from '@shared/contract/routes';
import { formatPhone } from '@shared/domain/phone-number';
import { PART_WORDS, PARTS, type Part, SKILLS, type Skill } from '@shared/domain/skills';
import { Announce } from '../core/announce';
import { Api, newId } from '../core/api';
import { Clock } from '../core/clock';
import { ProblemError, problemWords } from '../core/problem-error';
import { Session } from '../core/session';
import { Zone } from '../core/zone';
import { areaCodeOf, phoneOf, phoneTrouble } from '../ui/phone-entry';
import { FAULTY, focusFirst, OVERTAKEN } from './focus-first';
import { filled, inWords, showFaults } from './form-words';
import { OrderId } from './order-id';
import {
  fromEntry,
  nextEntry,
  overlapIn,
  type BreakEntry,
  MOST_BREAKS,
  type Shift,
  type ShiftEntry,
  USUAL_BREAK,
  toEntry,
} from './shift-entry';
import { SKILL_WORDS } from './skill-words';
import { StartPlace } from './start-place';
import { differing, type TechnicianField, type TechnicianTold, toldOf } from './technician-changes';

const MOST_SHIFTS = 30;

/** Adds a technician, or changes one. What was typed stays whatever the server answers. */
@Component({
  selector: 'thaw-technician-form',
  imports: [
    MatButton,
    MatCheckbox,
    MatFormFieldModule,
    MatIcon,
    MatIconButton,
    MatInput,
    ReactiveFormsModule,
    StartPlace,
  ],
  templateUrl: './technician-form.html',
  styleUrls: ['./parts.scss', './technician-form.scss'],
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class TechnicianForm {
  private readonly api = inject(Api);
  private readonly announce = inject(Announce);
  private readonly clock = inject(Clock);
  private readonly session = inject(Session);
  private readonly zone = inject(Zone);
  private readonly host = inject<ElementRef<HTMLElement>>(ElementRef);
  private readonly order = new OrderId();
  private readonly ownId = newId();
  private readonly areaCode = computed(() => areaCodeOf(this.session.settings()?.companyPhone));

  /** `null` adds one. */
  readonly technician = input.required<TechnicianDto | null>();
  readonly saved = output<TechnicianDto>();
  readonly closed = output();

  protected readonly skills = SKILLS.map((skill) => ({ skill, ...SKILL_WORDS[skill] }));
  protected readonly parts = PARTS.map((part) => ({ part, name: PART_WORDS[part] }));
  protected readonly form = new FormGroup({
    name: new FormControl('', { nonNullable: true, validators: filled('A name is needed.') }),
    phone: new FormControl('', {
      nonNullable: true,
      validators: inWords<string>((text) => phoneTrouble(text, this.areaCode()) || null),
    }),
    skills: checks(SKILLS),
    van: new FormGroup(
      Object.fromEntries(
        PARTS.map((part) => [
          part,
          new FormControl('0', {
            nonNullable: true,
            validators: inWords<string>((text) =>
              /^\d{1,2}$/.test(text.trim()) || text.trim() === '' ? null : '0 to 99',
            ),
          }),
        ]),
      ) as Record<Part, FormControl<string>>,
    ),
    active: new FormControl(true, { nonNullable: true }),
  });
  protected readonly start = signal<TechnicianTold['start'] | null>(null);
  protected readonly startPoint = computed(() => {
    const start = this.start();
    return start === null ? null : ([start[0], start[1]] as [number, number]);
  });
  protected readonly startError = signal<string | null>(null);
  protected readonly shifts = signal<readonly ShiftEntry[]>([]);
  protected readonly mostBreaks = MOST_BREAKS;
  protected readonly shiftErrors = signal<readonly string[]>([]);
  /** Shifts that are over: not shown, and not thrown away either. */
  private readonly pastShifts = signal<readonly Shift[]>([]);
  protected readonly pastCount = computed(() => this.pastShifts().length);

  /** The row that the form was filled from; a refusal brings a newer one. */
  private readonly base = signal<TechnicianDto | null>(null);
  protected readonly overtaken = signal<readonly string[]>([]);
  protected readonly trouble = signal<string | null>(null);
  protected readonly isBusy = signal(false);
  protected readonly title = computed(() => this.base()?.name ?? 'New technician');
  protected readonly zoneName = this.zone.name;

  constructor() {
    effect(() => {
      const technician = this.technician();
      untracked(() => {
        // Live changes to the row do not disturb who is typing; saving tells of them.
        if (technician && technician.id !== this.base()?.id) this.fill(technician);
      });
    });
  }

  protected setShift(index: number, part: Partial<ShiftEntry>): void {
    this.shifts.update((all) => all.map((one, i) => (i === index ? { ...one, ...part } : one)));
    this.shiftErrors.set([]);
  }

  protected addShift(): void {
    if (this.shifts().length + this.pastCount() >= MOST_SHIFTS) {
      this.trouble.set(`At most ${MOST_SHIFTS} shifts are kept.`);
      return;
    }
    this.shifts.update((all) => [...all, nextEntry(all, this.clock.exact(), this.zone.name())]);
  }

  protected setBreak(shift: number, index: number, part: Partial<BreakEntry>): void {
    const breaks = this.shifts()[shift]?.breaks ?? [];
    this.setShift(shift, {
      breaks: breaks.map((one, i) => (i === index ? { ...one, ...part } : one)),
    });
  }

  protected addBreak(shift: number): void {
    this.setShift(shift, { breaks: [...(this.shifts()[shift]?.breaks ?? []), USUAL_BREAK] });
  }

  protected removeBreak(shift: number, index: number): void {
    const breaks = this.shifts()[shift]?.breaks ?? [];
    this.setShift(shift, { breaks: breaks.filter((_, i) => i !== index) });
  }

  protected removeShift(index: number): void {
    this.shifts.update((all) => all.filter((_, i) => i !== index));
    this.shiftErrors.set([]);
  }

  protected setStart(point: readonly [number, number] | null): void {
    this.start.set(point);
    if (point) this.startError.set(null);
  }

  protected async save(): Promise<void> {
    if (this.isBusy()) return;
    this.trouble.set(null);
    const told = this.read();
    if (!told) {
      this.trouble.set('Some fields need another look.');
      focusFirst(this.host.nativeElement, FAULTY);
      return;
    }
    this.isBusy.set(true);
    try {
      const saved = await this.send(told);
      this.order.done();
      this.announce.notice(`${saved.name} is saved.`);
      this.saved.emit(saved);
    } catch (error) {
      this.refused(error, told);
    } finally {
      this.isBusy.set(false);
    }
  }

  private send(told: TechnicianTold): Promise<TechnicianDto> {
    const base = this.base();
    const { active, ...rest } = mutable(told);
    if (!base) {
      const asked = { technicianId: this.ownId, ...rest };
      return this.api.call('addTechnician', {
        body: { commandId: this.order.idFor(asked), ...asked },
      });
    }
    const all = { ...rest, active };
    const changes = Object.fromEntries(
      differing(toldOf(base), told).map((field) => [field, all[field]]),
    );
    const asked = { version: base.version, ...changes };
    return this.api.call('changeTechnician', {
      params: { technicianId: base.id },
      body: { commandId: this.order.idFor(asked), ...asked },
    });
  }

  private refused(error: unknown, told: TechnicianTold): void {
    const base = this.base();
    if (error instanceof ProblemError && error.code === 'stale-version' && base) {
      this.takeTheirs(base, error.current as TechnicianDto, told);
    } else if (!(error instanceof ProblemError) || !showFaults(this.form, error, OWN_WORDS)) {
      this.trouble.set(problemWords(error));
    }
  }

  /** What this person has not touched follows; what they changed stays, and both are told. */
  private takeTheirs(base: TechnicianDto, theirs: TechnicianDto, told: TechnicianTold): void {
    const mine = differing(toldOf(base), told);
    const changed = differing(toldOf(base), toldOf(theirs));
    this.overtaken.set(
      changed.map((field) =>
        mine.includes(field)
          ? `${FIELD_WORDS[field]}: changed by somebody else too; yours stands here`
          : `${FIELD_WORDS[field]}: changed by somebody else, and shown here`,
      ),
    );
    const kept = { ...toldOf(theirs) };
    this.fill(theirs);
    this.write({ ...kept, ...pick(told, mine) });
    focusFirst(this.host.nativeElement, OVERTAKEN);
  }

  private fill(technician: TechnicianDto): void {
    this.base.set(technician);
    this.write(toldOf(technician));
  }

  private write(told: TechnicianTold): void {
    const { name, active, start } = told;
    const phone = formatPhone(told.phone);
    const skills = Object.fromEntries(
      SKILLS.map((skill) => [skill, told.skills.includes(skill)]),
    ) as Record<Skill, boolean>;
    const van = Object.fromEntries(
      PARTS.map((part) => [part, String(told.van[part] ?? 0)]),
    ) as Record<Part, string>;
    this.form.reset({ name, phone, active, skills, van });
    this.start.set(start);
    const now = this.clock.exact();
    this.pastShifts.set(told.shifts.filter(({ endsAt }) => endsAt <= now));
    this.shifts.set(
      told.shifts
        .filter(({ endsAt }) => endsAt > now)
        .map((shift) => toEntry(shift, this.zone.name())),
    );
    this.shiftErrors.set([]);
    this.startError.set(null);
  }

  /** What the form says; `null` when something is wrong with it, which then stands beside it. */
  private read(): TechnicianTold | null {
    this.form.markAllAsTouched();
    const start = this.start();
    if (!start) this.startError.set('Choose where the day begins.');
    const shifts = this.readShifts();
    if (this.form.invalid || !start || !shifts) return null;
    const { name, phone, skills, van, active } = this.form.getRawValue();
    return {
      name: name.trim(),
      phone: phoneOf(phone, this.areaCode()) ?? phone,
      skills: SKILLS.filter((skill) => skills[skill]),
      van: Object.fromEntries(
        PARTS.map((part) => [part, Number(van[part])] as const).filter(([, count]) => count > 0),
      ),
      start,
      shifts,
      active,
    };
  }

  private readShifts(): readonly Shift[] | null {
    const read = this.shifts().map((entry) => fromEntry(entry, this.zone.name()));
    const errors = read.map((one) => (typeof one === 'string' ? one : ''));
    this.shiftErrors.set(errors);
    if (errors.some((words) => words !== '')) return null;
    const shifts = [...this.pastShifts(), ...read.filter((one) => typeof one !== 'string')];
    const overlap = overlapIn(shifts);
    if (!overlap) return shifts;
    this.shiftErrors.set(
      read.map((one) =>
        typeof one !== 'string' && one.startsAt === overlap[1].startsAt
          ? 'Overlaps another shift.'
          : '',
      ),
    );
    return null;
  }
}

function checks<K extends string>(keys: readonly K[]): FormGroup<Record<K, FormControl<boolean>>> {
  return new FormGroup(
    Object.fromEntries(
      keys.map((key) => [key, new FormControl(false, { nonNullable: true })]),
    ) as Record<K, FormControl<boolean>>,
  );
}

/** As the contract's types want it: arrays that may be written to. */
const mutable = (told: TechnicianTold) => ({
  name: told.name,
  phone: told.phone,
  skills: [...told.skills],
  van: { ...told.van },
  start: [told.start[0], told.start[1]] as [number, number],
  shifts: told.shifts.map(({ startsAt, endsAt, breaks }) => ({
    startsAt,
    endsAt,
    ...(breaks && breaks.length > 0 ? { breaks: breaks.map((one) => ({ ...one })) } : {}),
  })),
  active: told.active,
});

const pick = (told: TechnicianTold, fields: readonly TechnicianField[]): Partial<TechnicianTold> =>
  Object.fromEntries(fields.map((field) => [field, told[field]]));

const FIELD_WORDS: Readonly<Record<TechnicianField, string>> = {
  name: 'Name',
  phone: 'Phone',
  skills: 'Skills',
  van: 'Parts on the van',
  start: 'Where the day begins',
  shifts: 'Shifts',
  active: 'Whether they work',
};

const OWN_WORDS: Readonly<Record<string, string>> = {
  name: 'A name of at most 80 characters is needed.',
  phone: 'A telephone number is needed, as in 252 555 0142.',
};
