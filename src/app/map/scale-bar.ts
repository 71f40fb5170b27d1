/** A length on the ground and how long it is on screen. */
export interface ScaleBar {
  readonly words: string;
  readonly widthPx: number;
}

const FEET_PER_METRE = 3.280_839_895;
const FEET_PER_MILE = 5280;
const MOST_PX = 96;
const STEPS = [1, 2, 3, 5];

/** The longest round number of miles or feet that fits. */
export function scaleBar(metresPerPx: number): ScaleBar {
  const mostFeet = MOST_PX * metresPerPx * FEET_PER_METRE;
  const mostMiles = mostFeet / FEET_PER_MILE;
  const [most, unit, feet] =
    mostMiles >= 1 ? [mostMiles, 'mi', FEET_PER_MILE] : [mostFeet, 'ft', 1];
  const tens = 10 ** Math.floor(Math.log10(most));
  const length = tens * (STEPS.findLast((step) => step * tens <= most) ?? 1);
  return {
    words: `${length} ${unit}`,
    widthPx: Math.round((length * feet) / FEET_PER_METRE / metresPerPx),
  };
}
