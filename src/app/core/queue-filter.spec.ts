/** @jest-environment node */
import { isFiltering, matcher, NO_FILTER, type QueueFilter } from './queue-filter';
import { aCallRow, idOf } from './testing';

const call = aCallRow(12, {
  name: 'Inés Peña',
  phone: '+12525550142',
  address: { text: '4 Tern Lane', unitNo: 'Lot 7', lonLat: null, kind: 'unlocated' },
  skills: ['electrical'],
});

const passes = (filter: Partial<QueueFilter>, pocket: ReadonlySet<string> | null = null): boolean =>
  matcher({ ...NO_FILTER, ...filter }, pocket)(call);

describe('matcher', () => {
  it.each(['pena', 'INÉS', 'tern lot', '12', '555-0142', '5550142', '(252) 555'])(
    'finds the call by "%s"',
    (text) => expect(passes({ text })).toBe(true),
  );
  it.each(['penny', 'tern 9', '0143', '5550199'])('does not find it by "%s"', (text) =>
    expect(passes({ text })).toBe(false),
  );
  it('wants every skill, any state and any contents', () => {
    expect(passes({ skills: ['electrical'], states: ['new', 'waiting'] })).toBe(true);
    expect(passes({ skills: ['electrical', 'commercial'] })).toBe(false);
    expect(passes({ states: ['new'] })).toBe(false);
    expect(passes({ contents: ['medicine', 'fresh-food'] })).toBe(true);
    expect(passes({ contents: ['medicine'] })).toBe(false);
  });
  it('keeps to the pocket, and to nothing when the pocket is gone', () => {
    expect(passes({ pocketKey: 'a' }, new Set([idOf(1012)]))).toBe(true);
    expect(passes({ pocketKey: 'a' }, new Set())).toBe(false);
  });
});

describe('isFiltering', () => {
  it('does not count blanks', () => {
    expect(isFiltering({ ...NO_FILTER, text: '  ' })).toBe(false);
    expect(isFiltering({ ...NO_FILTER, areaId: idOf(1) })).toBe(true);
  });
});
