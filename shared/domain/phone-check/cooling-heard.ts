import type { CoolingNow } from '../cold-unit';
import type { PhoneCheckAnswers } from './phone-check';

/** What a unit does for its contents, as the phone check was told; null when it was not asked. */
export function coolingHeard({ doing, start }: PhoneCheckAnswers): CoolingNow | null {
  const said = start ?? doing;
  switch (said) {
    case 'runs-warm':
      return 'partial';
    case 'dead':
    case 'lit-silent':
    case 'clicks':
    case 'trips':
      return 'none';
    default:
      return null;
  }
}
