import { creditParts, creditText, OSM_COPYRIGHT_URL } from '@shared/domain/map-credit';

describe('the credit of a map', () => {
  it('leads from OpenStreetMap to its licence, and from nothing else', () => {
    expect(creditParts('© OpenStreetMap contributors; Addresses of Skerry County')).toEqual([
      { text: '© OpenStreetMap contributors', url: OSM_COPYRIGHT_URL },
      { text: '; Addresses of Skerry County', url: null },
    ]);
    expect(creditParts('Skerry County is invented')).toEqual([
      { text: 'Skerry County is invented', url: null },
    ]);
    expect(creditParts('')).toEqual([]);
  });

  it('has the address behind the name in a file', () => {
    expect(creditText('Map: OpenStreetMap')).toBe(`Map: OpenStreetMap (${OSM_COPYRIGHT_URL})`);
    expect(creditText('Skerry County is invented')).toBe('Skerry County is invented');
  });
});
