/** Where the licence of OpenStreetMap's data is told; its attribution guidelines ask for this link (OSMF, "Attribution Guidelines", 2021). */
export const OSM_COPYRIGHT_URL = 'https://www.openstreetmap.org/copyright';

export interface CreditPart {
  readonly text: string;
  /** Where it leads; `null` for plain words. */
  readonly url: string | null;
}

/** A region's attribution in parts, with OpenStreetMap's name leading to its licence. */
export function creditParts(attribution: string): CreditPart[] {
  return attribution
    .split(/((?:© )?OpenStreetMap(?: contributors)?)/)
    .filter((text) => text !== '')
    .map((text) => ({ text, url: text.includes('OpenStreetMap') ? OSM_COPYRIGHT_URL : null }));
}

/** The same as plain text, for files: the address stands behind the name. */
export const creditText = (attribution: string): string =>
  creditParts(attribution)
    .map(({ text, url }) => (url ? `${text} (${url})` : text))
    .join('');
