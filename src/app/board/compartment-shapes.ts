import type { CompartmentKind } from '@shared/domain/cold-unit';

/** Round for what is fresh, six-sided like ice, a lozenge for medicine, a crate for stock. */
export const COMPARTMENT_SHAPES: Readonly<Record<CompartmentKind, string>> = {
  'fresh-food': 'M0 -9A9 9 0 1 1 0 9A9 9 0 1 1 0 -9Z',
  freezer: 'M-4.9 -8.6H4.9L9.6 0L4.9 8.6H-4.9L-9.6 0Z',
  medicine: 'M0 -9.8L9.8 0L0 9.8L-9.8 0Z',
  'commercial-stock': 'M-8.2 -8.2H8.2V8.2H-8.2Z',
};
