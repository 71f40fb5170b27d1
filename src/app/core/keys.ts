import { DOCUMENT } from '@angular/common';
import { computed, DestroyRef, inject, Injectable, signal } from '@angular/core';
import { MatDialog } from '@angular/material/dialog';
import { fromStorage, toStorage } from './storage';

/** Something that a key does. */
export interface KeyAction {
  /**
   * The key as `KeyboardEvent.key` names it, modifiers before it, steps apart by a blank:
   * `/`, `Escape`, `Ctrl+Enter`, `Shift+ArrowUp`, `g m`.
   */
  readonly keys: string;
  /** What it does, as a person would say it: "Search the queue". */
  readonly does: string;
  /** The heading under which the sheet lists it: "Queue", "Map". */
  readonly scope: string;
  readonly run: (event: KeyboardEvent) => void;
  /** Whether it applies now; the key then goes to an earlier registration, or to the browser. */
  readonly when?: () => boolean;
  /** Also while a field has the focus. Keys with Ctrl, Alt or Meta always do. */
  readonly inFields?: boolean;
  /** Also while a dialog is open. */
  readonly inDialogs?: boolean;
  /** Whether holding the key down goes on doing it. */
  readonly repeats?: boolean;
}

const STORED_AS = 'thawline:single-keys';
/** Between the two keys of `g m`. */
const STEP_WITHIN_MS = 1_500;

/**
 * Which key does what, right now. Whoever shows something registers its keys; the newest
 * registration of a key wins. Single-character keys can be turned off (WCAG 2.2, 2.1.4).
 */
@Injectable({ providedIn: 'root' })
export class Keys {
  private readonly document = inject(DOCUMENT);
  private readonly dialogs = inject(MatDialog);

  private readonly registered = signal<readonly KeyAction[]>([]);
  private readonly on = signal(fromStorage(STORED_AS) !== 'off');
  private firstStep: { readonly keys: string; readonly at: number } | null = null;

  /** Whether single-character keys work. */
  readonly isOn = this.on.asReadonly();

  /** What the sheet lists: each scope with its actions, in the order of registration. */
  readonly byScope = computed(() => {
    const scopes = new Map<string, KeyAction[]>();
    for (const action of this.registered()) {
      if (isShadowed(action, this.registered())) continue;
      const scope = scopes.get(action.scope);
      if (scope) scope.push(action);
      else scopes.set(action.scope, [action]);
    }
    return [...scopes].map(([scope, actions]) => ({ scope, actions }));
  });

  constructor() {
    const heard = (event: KeyboardEvent): void => this.heard(event);
    this.document.addEventListener('keydown', heard);
    inject(DestroyRef).onDestroy(() => this.document.removeEventListener('keydown', heard));
  }

  /** Adds keys until `owner` is destroyed, or until the returned function is called. */
  register(actions: readonly KeyAction[], owner?: DestroyRef): () => void {
    this.registered.update((all) => [...all, ...actions]);
    const remove = (): void =>
      this.registered.update((all) => all.filter((one) => !actions.includes(one)));
    owner?.onDestroy(remove);
    return remove;
  }

  turn(onOrOff: 'on' | 'off'): void {
    this.on.set(onOrOff === 'on');
    toStorage(STORED_AS, onOrOff);
  }

  private heard(event: KeyboardEvent): void {
    if (event.defaultPrevented || event.isComposing || isModifier(event.key)) return;
    const pressed = nameOf(event);
    const step = this.firstStep;
    this.firstStep = null;
    const sequence =
      step && event.timeStamp - step.at < STEP_WITHIN_MS ? `${step.keys} ${pressed}` : null;

    const action =
      (sequence === null ? undefined : this.find(sequence, event)) ?? this.find(pressed, event);
    if (action) {
      if (event.repeat && !action.repeats) return;
      event.preventDefault();
      action.run(event);
    } else if (this.begins(pressed, event)) {
      this.firstStep = { keys: pressed, at: event.timeStamp };
    }
  }

  private find(keys: string, event: KeyboardEvent): KeyAction | undefined {
    return this.registered().findLast(
      (action) => action.keys === keys && this.applies(action, event),
    );
  }

  private begins(pressed: string, event: KeyboardEvent): boolean {
    return this.registered().some(
      (action) => action.keys.startsWith(`${pressed} `) && this.applies(action, event),
    );
  }

  private applies(action: KeyAction, event: KeyboardEvent): boolean {
    const isCharacter = isCharacterKey(action.keys);
    if (isCharacter && !this.on()) return false;
    if (isTypedInto(event) && !action.inFields && !hasModifier(action.keys)) return false;
    if (this.dialogs.openDialogs.length > 0 && !action.inDialogs) return false;
    return action.when?.() ?? true;
  }
}

/** Keys that type a character, and so fall under WCAG 2.1.4. */
export const isCharacterKey = (keys: string): boolean =>
  keys.split(' ').every((step) => [...step].length === 1);

const hasModifier = (keys: string): boolean => /(Ctrl|Alt|Meta)\+/.test(keys);

const isModifier = (key: string): boolean =>
  key === 'Shift' || key === 'Control' || key === 'Alt' || key === 'Meta';

/** `Shift` counts only where it does not already show in the character: `?`, but `Shift+Tab`. */
function nameOf(event: KeyboardEvent): string {
  const isCharacter = [...event.key].length === 1 && event.key !== ' ';
  const parts = [
    event.ctrlKey ? 'Ctrl' : '',
    event.altKey ? 'Alt' : '',
    event.metaKey ? 'Meta' : '',
    event.shiftKey && !isCharacter ? 'Shift' : '',
    event.key === ' ' ? 'Space' : event.key,
  ];
  return parts.filter(Boolean).join('+');
}

/** Inputs without text, such as checkboxes, leave the keys to the page. */
const TEXTLESS = new Set(['button', 'checkbox', 'color', 'file', 'radio', 'range', 'submit']);

function isTypedInto(event: KeyboardEvent): boolean {
  const target = event.composedPath()[0];
  if (!(target instanceof HTMLElement)) return false;
  if (target instanceof HTMLInputElement) return !TEXTLESS.has(target.type);
  return (
    target instanceof HTMLTextAreaElement ||
    target instanceof HTMLSelectElement ||
    target.isContentEditable ||
    // Lists and choices take letters to jump to an entry.
    target.closest('[role=listbox], [role=combobox], [role=menu]') !== null
  );
}

const isShadowed = (action: KeyAction, all: readonly KeyAction[]): boolean =>
  !action.when && all.findLast((one) => one.keys === action.keys && !one.when) !== action;
