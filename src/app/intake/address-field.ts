import {
  ChangeDetectionStrategy,
  Component,
  computed,
  DestroyRef,
  type ElementRef,
  inject,
  input,
  output,
  signal,
  viewChild,
} from '@angular/core';
import type { Address, AddressSuggestion } from '@shared/contract/calls';
import type { LonLat } from '@shared/contract/common';
import { isOnlyPostBox } from '@shared/domain/address/post-box';
import { Api } from '../core/api';
import { ProblemError } from '../core/problem-error';
import { ADDRESS_KIND_WORDS } from './address-words';
import { readCoordinates } from './coordinates';
import { NO_ADDRESS } from './intake-draft';
import { PinRequest } from './pin-request';

/** Long enough to type the next letter, short enough not to be waited for. */
const DEBOUNCE_MS = 120;
const POST_BOX = 'Nobody can drive to a post box: please ask for the street.';
const UNKNOWN = 'Nothing like it in this region. It is kept as typed; a point on the map helps.';
let fields = 0;

/** An address with suggestions from the region's address points, or a point shown on the map. */
@Component({
  selector: 'thaw-address-field',
  templateUrl: './address-field.html',
  styleUrls: ['./fields.scss', './address-field.scss'],
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class AddressField {
  private readonly api = inject(Api);
  private readonly pins = inject(PinRequest);

  readonly address = input.required<Address>();
  readonly error = input<string>();
  readonly changed = output<Address>();
  readonly left = output();

  protected readonly id = `address-${++fields}`;
  protected readonly kindWords = ADDRESS_KIND_WORDS;
  protected readonly suggestions = signal<readonly AddressSuggestion[]>([]);
  protected readonly active = signal(-1);
  protected readonly isOpen = computed(() => this.suggestions().length > 0);
  protected readonly trouble = signal('');
  protected readonly isAskingMap = signal(false);

  private readonly field = viewChild.required<ElementRef<HTMLInputElement>>('field');
  private timer: ReturnType<typeof setTimeout> | undefined;
  private asked = 0;

  constructor() {
    inject(DestroyRef).onDestroy(() => {
      clearTimeout(this.timer);
      if (this.isAskingMap()) this.pins.cancel();
    });
  }

  focus(): void {
    this.field().nativeElement.focus();
  }

  protected type(text: string): void {
    const point = readCoordinates(text);
    this.close();
    clearTimeout(this.timer);
    this.asked++;
    this.trouble.set(isOnlyPostBox(text) ? POST_BOX : '');
    if (point) {
      this.changed.emit({ ...this.address(), text, lonLat: point, kind: 'pin' });
      return;
    }
    // What was found before belongs to what was typed before.
    this.changed.emit({ ...NO_ADDRESS, unitNo: this.address().unitNo, text });
    if (text.trim().length >= 3 && !isOnlyPostBox(text))
      this.timer = setTimeout(() => void this.suggest(text), DEBOUNCE_MS);
  }

  protected typeUnitNo(unitNo: string): void {
    this.changed.emit({ ...this.address(), unitNo });
  }

  protected pick(suggestion: AddressSuggestion): void {
    const { label, lonLat, kind, unitNo } = suggestion;
    this.changed.emit({
      text: label,
      lonLat,
      kind,
      unitNo: unitNo === '' ? this.address().unitNo : unitNo,
    });
    this.trouble.set('');
    this.close();
  }

  protected press(event: KeyboardEvent): void {
    const last = this.suggestions().length - 1;
    if (last < 0) return;
    const step = { ArrowDown: 1, ArrowUp: -1 }[event.key];
    if (step !== undefined) {
      event.preventDefault();
      const next = this.active() + step;
      this.active.set(next < 0 ? last : next > last ? 0 : next);
    } else if (event.key === 'Enter' && !event.ctrlKey) {
      event.preventDefault();
      const chosen = this.suggestions()[Math.max(this.active(), 0)];
      if (chosen) this.pick(chosen);
    } else if (event.key === 'Escape') {
      event.preventDefault();
      this.close();
    }
  }

  protected leave(): void {
    this.close();
    this.left.emit();
  }

  /** Asks for a point on the map, then for the address nearest to it. */
  async askMap(): Promise<void> {
    const typed = this.address();
    this.isAskingMap.set(true);
    const point = await this.pins.ask({
      prompt: 'Where is the caller? Point on the map, or press Escape.',
      near: typed.lonLat,
    });
    this.isAskingMap.set(false);
    if (!point) return;
    this.trouble.set('');
    this.changed.emit({
      ...typed,
      text: typed.text || pointText(point),
      lonLat: point,
      kind: 'pin',
    });
    if (typed.text === '') await this.nameThePoint(point);
    this.focus();
  }

  private async nameThePoint(point: LonLat): Promise<void> {
    try {
      const [lon, lat] = point.map(String) as [string, string];
      const { suggestion } = await this.api.call('nearestAddress', { query: { lon, lat } });
      if (suggestion && this.address().lonLat === point) {
        // Far from every address the answer names the point itself.
        const text = suggestion.kind === 'pin' ? suggestion.label : `Near ${suggestion.label}`;
        this.changed.emit({ ...this.address(), text });
      }
    } catch (error) {
      if (!(error instanceof ProblemError)) throw error; // The coordinates stay as its name.
    }
  }

  private async suggest(text: string): Promise<void> {
    const asked = ++this.asked;
    try {
      const { suggestions } = await this.api.call('suggestAddresses', { query: { text } });
      // Answers may overtake each other; only the one to the newest question counts.
      if (asked !== this.asked) return;
      this.trouble.set(suggestions.length === 0 ? UNKNOWN : '');
      this.suggestions.set(suggestions.slice(0, 8));
      this.active.set(suggestions.length > 0 ? 0 : -1);
    } catch (error) {
      if (!(error instanceof ProblemError)) throw error;
      if (asked === this.asked) this.trouble.set('No suggestions now; what you type is kept.');
    }
  }

  private close(): void {
    this.suggestions.set([]);
    this.active.set(-1);
  }
}

const pointText = ([lon, lat]: LonLat): string => `${lat.toFixed(5)}, ${lon.toFixed(5)}`;
