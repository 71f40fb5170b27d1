const SHORT = new Intl.NumberFormat('en-US', {
  style: 'currency',
  currency: 'USD',
  notation: 'compact',
  maximumSignificantDigits: 3,
});

/** `$860`, `$1.2K`: US dollars where there is little room. */
export const moneyShort = (cents: number): string => SHORT.format(Math.round(cents / 100));
