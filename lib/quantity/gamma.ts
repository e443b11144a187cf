import { logGamma } from './student';

/**
 * Q(a, x) = Γ(a, x)/Γ(a): the probability that χ² with 2a degrees of freedom exceeds 2x. By its series for x < a + 1
 * (Abramowitz and Stegun 6.5.29), else by its continued fraction (6.5.31, Lentz's method).
 */
export function incompleteGammaQ(a: number, x: number): number {
  if (!(x > 0)) return 1;
  if (x === Infinity) return 0;
  const front = Math.exp(a * Math.log(x) - x - logGamma(a));
  if (x < a + 1) {
    let term = 1 / a;
    let sum = term;
    for (let n = 1; n < 1000 && term > 1e-17 * sum; n++) {
      term *= x / (a + n);
      sum += term;
    }
    return 1 - front * sum;
  }
  let b = x + 1 - a;
  let c = 1e300;
  let d = 1 / b;
  let result = d;
  for (let n = 1; n < 1000; n++) {
    const an = -n * (n - a);
    b += 2;
    d = 1 / (an * d + b);
    c = b + an / c;
    const step = c * d;
    result *= step;
    if (Math.abs(step - 1) < 1e-16) break;
  }
  return front * result;
}
