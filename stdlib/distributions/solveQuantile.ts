// Quantiles by solving P(X > x) = upper where no closed form is at hand.

/** The x in (low, high) at which a falling upper-tail function equals `upper`, by bisection on whatever scale `middle` gives, to the last digits.
 *  @param upperTail  falling in x, values in [0, 1]
 *  @param upper      in (0, 1)
 *  Cost about 60 evaluations for any start: used where quantiles are few. */
export function solveUpperQuantile(upperTail: (x: number) => number, upper: number, low: number, high: number): number {
  let a = low, b = high;
  for (let grow = 0; upperTail(b) > upper && grow < 1000; grow++) { a = b; b = b * 2; }
  for (let i = 0; i < 200; i++) {
    const middle = 0.5 * (a + b);
    if (middle <= a || middle >= b) break;
    if (upperTail(middle) > upper) a = middle; else b = middle;
  }
  return 0.5 * (a + b);
}
