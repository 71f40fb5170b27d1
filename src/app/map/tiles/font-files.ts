import type { FontFile } from './tile-orders';

/** The files of a font family, as the page's style sheets name them. */
export function fontFiles(family: string, page: Document = document): FontFile[] {
  return [...page.styleSheets].flatMap((sheet) =>
    [...rulesOf(sheet)].flatMap((rule): FontFile[] => {
      if (!(rule instanceof CSSFontFaceRule)) return [];
      const { style } = rule;
      const name = style.getPropertyValue('font-family').replace(/["']/g, '').trim();
      const url = /url\(\s*["']?([^"')]+)["']?\s*\)/.exec(style.getPropertyValue('src'))?.[1];
      if (name !== family || !url) return [];
      return [
        {
          family,
          url: new URL(url, sheet.href ?? page.baseURI).href,
          weight: style.getPropertyValue('font-weight') || 'normal',
          style: style.getPropertyValue('font-style') || 'normal',
          range: style.getPropertyValue('unicode-range') || 'U+0-10FFFF',
        },
      ];
    }),
  );
}

/** A style sheet of another host does not show its rules; ours are all our own. */
function rulesOf(sheet: CSSStyleSheet): Iterable<CSSRule> {
  try {
    return sheet.cssRules;
  } catch {
    return [];
  }
}
