import type { CompartmentKind } from '@shared/domain/cold-unit';

/** How a compartment is called on every screen, and the letter that stands for it on a strip. */
export const COMPARTMENT_WORDS: Readonly<
  Record<
    CompartmentKind,
    { readonly letter: string; readonly name: string; readonly short: string }
  >
> = {
  'fresh-food': { letter: 'F', name: 'Fresh food', short: 'fresh' },
  freezer: { letter: 'Z', name: 'Freezer', short: 'freezer' },
  medicine: { letter: 'M', name: 'Medicine', short: 'medicine' },
  'commercial-stock': { letter: 'C', name: 'Commercial stock', short: 'commercial' },
};

export { UNIT_WORDS } from '@shared/domain/cold-unit';
