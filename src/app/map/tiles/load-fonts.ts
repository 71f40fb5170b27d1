import type { FontFile } from './tile-orders';

/** Loads fonts into this thread. Text drawn before its font has come would be measured with another one. */
export const loadFonts = (files: readonly FontFile[]): Promise<unknown> =>
  Promise.allSettled(
    files.map(async ({ family, url, weight, style, range }) => {
      const font = new FontFace(family, `url(${JSON.stringify(url)})`, {
        weight,
        style,
        unicodeRange: range,
      });
      const { fonts } = globalThis as unknown as { readonly fonts: { add(font: FontFace): void } };
      fonts.add(await font.load());
    }),
  );
