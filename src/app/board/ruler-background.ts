import { DOCUMENT } from '@angular/common';
import { inject } from '@angular/core';
import { rulerBackground } from './cold-strip-scale';

const GRID = '--strip-grid';

/** Writes the ruler's lines once into the page, where all strips find them as `--strip-grid`. */
export function useRulerBackground(): void {
  const root = inject(DOCUMENT).documentElement;
  if (root.style.getPropertyValue(GRID) === '') root.style.setProperty(GRID, rulerBackground());
}
