import type { CallRow } from '@shared/contract/calls';
import { isOpen, type CallState } from '@shared/domain/call-state';
import type { CompartmentKind } from '@shared/domain/cold-unit';
import type { Skill } from '@shared/domain/skills';
import type { Lane, Urgency } from '@shared/domain/urgency';

/** Who can still help, short enough for a row. */
export const LANE_WORDS: Readonly<Record<Lane, string>> = {
  1: 'Medicine: phone first',
  2: 'Save by phone or ice',
  3: 'Save by a visit',
  4: 'Ordinary repair',
};

/** "$4.20", for each minute that the call waits; below a cent nobody is helped by a number. */
export function lossWords({ lossPerMinuteCents }: Urgency): string {
  return lossPerMinuteCents < 1 ? '' : `$${(lossPerMinuteCents / 100).toFixed(2)}`;
}

export const SKILL_WORDS: Readonly<Record<Skill, string>> = {
  electrical: 'Electrical',
  'sealed-system': 'Sealed system',
  commercial: 'Commercial',
};

/** The states as a dispatcher looks for them, several of the machine's in one where it helps. */
export const STATE_GROUPS: readonly {
  readonly key: string;
  readonly label: string;
  readonly states: readonly CallState[];
}[] = [
  { key: 'any', label: 'Any state', states: [] },
  { key: 'unchecked', label: 'New', states: ['new'] },
  { key: 'checking', label: 'On the phone', states: ['checking'] },
  { key: 'waiting', label: 'Waiting for a visit', states: ['waiting'] },
  {
    key: 'route',
    label: 'On a route',
    states: ['planned', 'offered', 'accepted', 'travelling', 'on-site'],
  },
  { key: 'parts', label: 'Parts on order', states: ['parts-on-order'] },
  { key: 'no-access', label: 'No access', states: ['no-access'] },
];

export const CONTENTS_WORDS: readonly { readonly kind: CompartmentKind; readonly label: string }[] =
  [
    { kind: 'medicine', label: 'Medicine' },
    { kind: 'freezer', label: 'Freezer' },
    { kind: 'fresh-food', label: 'Fresh food' },
    { kind: 'commercial-stock', label: 'Commercial stock' },
  ];

export const isSettledRow = (call: CallRow): boolean => !isOpen(call.state);
