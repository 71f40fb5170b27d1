const COEFFICIENTS = [
  676.5203681218851, -1259.1392167224028, 771.32342877765313, -176.61502916214059,
  12.507343278686905, -0.13857109526572012, 9.9843695780195716e-6, 1.5056327351493116e-7,
];

/** ln of the gamma function for x > 0, to about 14 digits: Lanczos's approximation (1964; from memory). */
export function logGamma(x: number): number {
  if (x < 0.5) return Math.log(Math.PI / Math.sin(Math.PI * x)) - logGamma(1 - x);
  const z = x - 1;
  const sum = COEFFICIENTS.reduce((total, c, i) => total + c / (z + i + 1), 0.99999999999980993);
  const t = z + COEFFICIENTS.length - 0.5;
  return Math.log(2 * Math.PI) / 2 + (z + 0.5) * Math.log(t) - t + Math.log(sum);
}
