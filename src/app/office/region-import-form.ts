import {
  ChangeDetectionStrategy,
  Component,
  computed,
  type ElementRef,
  inject,
  signal,
  viewChild,
} from '@angular/core';
import { FormControl, FormGroup, ReactiveFormsModule } from '@angular/forms';
import { MatAutocompleteModule } from '@angular/material/autocomplete';
import { MatButton } from '@angular/material/button';
import { MatFormFieldModule } from '@angular/material/form-field';
import { MatInput } from '@angular/material/input';
import { MatProgressBar } from '@angular/material/progress-bar';
import { MatSelectModule } from '@angular/material/select';
import type { RegionFile } from '@shared/contract/regions';
import { ProblemError, problemWords } from '../core/problem-error';
import { Session } from '../core/session';
import { filled, inWords, showFaults } from './form-words';
import { type FileRole, RegionModel } from './region-model';
import { fileName, isExtract, megabytes, percent } from './region-words';

/** The zones that this browser knows by name. */
const ZONES = Intl.supportedValuesOf('timeZone');
const ZONES_SHOWN = 8;

const keyOf = ({ from, name }: RegionFile): string => `${from}/${name}`;

/** Orders an import: which extract, which addresses, under which name. */
@Component({
  selector: 'thaw-region-import-form',
  imports: [
    MatAutocompleteModule,
    MatButton,
    MatFormFieldModule,
    MatInput,
    MatProgressBar,
    MatSelectModule,
    ReactiveFormsModule,
  ],
  templateUrl: './region-import-form.html',
  styleUrls: ['./parts.scss', './region-part.scss'],
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class RegionImportForm {
  protected readonly model = inject(RegionModel);
  private readonly session = inject(Session);
  private readonly extractPicker =
    viewChild.required<ElementRef<HTMLInputElement>>('extractPicker');
  private readonly addressesPicker =
    viewChild.required<ElementRef<HTMLInputElement>>('addressesPicker');

  protected readonly form = new FormGroup({
    extract: new FormControl('', {
      nonNullable: true,
      validators: filled('Send an extract, or choose one that is on the server.'),
    }),
    addresses: new FormControl('', { nonNullable: true }),
    addressesAttribution: new FormControl('', { nonNullable: true }),
    name: new FormControl('', {
      nonNullable: true,
      validators: filled('A region needs a name, such as the county’s.'),
    }),
    timeZone: new FormControl(this.session.zone(), {
      nonNullable: true,
      validators: inWords<string>((zone) =>
        ZONES.includes(zone.trim()) || zone.trim() === 'UTC'
          ? null
          : 'A time zone by its name, as in America/New_York.',
      ),
    }),
  });
  private readonly zoneText = signal(this.form.controls.timeZone.value);
  protected readonly hasAddresses = signal(false);
  protected readonly mostWords = megabytes;
  protected readonly trouble = signal<string | null>(null);

  protected readonly extracts = computed(() => this.filesFor('extract'));
  protected readonly addressFiles = computed(() => this.filesFor('addresses'));
  protected readonly zones = computed(() => {
    const typed = this.zoneText().trim().toLowerCase().replace(/\s+/g, '_');
    return ZONES.filter((zone) => zone.toLowerCase().includes(typed)).slice(0, ZONES_SHOWN);
  });
  protected readonly sendingWords = computed(() => {
    const sending = this.model.sending();
    return sending ? `Sending ${sending.name}: ${percent(sending.share)}` : '';
  });

  constructor() {
    this.form.controls.timeZone.valueChanges.subscribe((text) => this.zoneText.set(text));
    this.form.controls.addresses.valueChanges.subscribe((key) => this.hasAddresses.set(key !== ''));
  }

  protected choose(role: FileRole): void {
    const picker = role === 'extract' ? this.extractPicker : this.addressesPicker;
    picker().nativeElement.click();
  }

  protected async picked(role: FileRole, field: HTMLInputElement): Promise<void> {
    const file = field.files?.[0];
    field.value = '';
    if (!file) return;
    const sent = await this.model.send(role, file);
    if (!sent) return;
    this.form.controls[role].setValue(keyOf(sent));
    if (role === 'extract') this.proposeName(file.name);
  }

  protected proposeName(file: string): void {
    const { name } = this.form.controls;
    if (name.value.trim() !== '') return;
    const words = fileName(file)
      .replace(/(\.osm)?\.pbf$/i, '')
      .replace(/[-_]?(latest|\d{6,8})$/i, '')
      .split(/[-_\s]+/)
      .filter((word) => word !== '');
    name.setValue(words.map((word) => word.charAt(0).toUpperCase() + word.slice(1)).join(' '));
  }

  protected async start(): Promise<void> {
    this.form.markAllAsTouched();
    if (this.form.invalid || this.model.isBusy() || this.model.sending()) return;
    const { name, timeZone, addressesAttribution } = this.form.getRawValue();
    const extract = this.chosen('extract');
    if (!extract) return;
    this.trouble.set(null);
    try {
      await this.model.startImport({
        name: name.trim(),
        timeZone: timeZone.trim(),
        extract,
        addresses: this.chosen('addresses'),
        addressesAttribution: this.hasAddresses() ? addressesAttribution : '',
      });
    } catch (error) {
      if (!(error instanceof ProblemError) || !showFaults(this.form, error))
        this.trouble.set(problemWords(error));
    }
  }

  private chosen(role: FileRole): Pick<RegionFile, 'name' | 'from'> | null {
    const key = this.form.controls[role].value;
    const file = this.model.all()?.files.find((one) => keyOf(one) === key);
    return file ? { name: file.name, from: file.from } : null;
  }

  private filesFor(role: FileRole): { key: string; words: string; name: string }[] {
    return (this.model.all()?.files ?? [])
      .filter(({ name }) => isExtract(name) === (role === 'extract'))
      .map((file) => ({
        key: keyOf(file),
        name: file.name,
        words: `${fileName(file.name)}, ${megabytes(file.bytes)}${file.from === 'upload' ? ', sent' : ', on the server'}`,
      }));
  }
}
