// Which lags a model has, and how its two factors multiply out to few lags.

/** A product of a plain and a seasonal lag polynomial, as sparse lags of the product. */
export interface Product {
  /** Lags of the plain factor, ascending. */
  readonly plain: Int32Array;
  /** Lags of the seasonal factor, ascending, counted in periods (multiples of the season). */
  readonly seasonal: Int32Array;
  /** Distinct lags of the product, ascending. */
  readonly lags: Int32Array;
  /** Highest lag; 0 for no lags. */
  readonly degree: number;
  /** Where each factor's lag, and each sum of two lags (plain major), stands in `lags`. */
  readonly atPlain: Int32Array;
  readonly atSeasonal: Int32Array;
  readonly atCross: Int32Array;
  /** -1 for the autoregressive side (1 - ...)(1 - ...), +1 for the moving-average side: the sign of a cross term. */
  readonly cross: 1 | -1;
}

/** One factor: its lags in periods, where its coefficients begin, and the sign in 1 - sign sum c_i B^lag_i. */
export interface Factor { readonly lags: Int32Array; readonly from: number; readonly sign: 1 | -1 }

/** Lag sets of a multiplicative seasonal model. Parameters stand in the order phi, Phi, theta, Theta. */
export interface Shape {
  readonly season: number;
  readonly ar: Product;
  readonly ma: Product;
  /** Number of coefficients: those of the four factors together. */
  readonly count: number;
  /** phi, Phi, theta, Theta: where each begins in the parameters. */
  readonly factors: readonly Factor[];
  /** Longest memory of the pre-sample: max of the two degrees. */
  readonly memory: number;
}

const NONE = new Int32Array(0);

/** @param arLags, maLags  distinct lags >= 1; seasonal ones counted in season lengths */
export function makeShape(arLags: readonly number[], seasonalArLags: readonly number[], maLags: readonly number[], seasonalMaLags: readonly number[], season: number): Shape {
  const ar = product(arLags, seasonalArLags.map(l => l * season), -1);
  const ma = product(maLags, seasonalMaLags.map(l => l * season), 1);
  const factors: Factor[] = [];
  let from = 0;
  for (const [lags, sign] of [[ar.plain, 1], [ar.seasonal, 1], [ma.plain, -1], [ma.seasonal, -1]] as const) { factors.push({ lags, from, sign }); from += lags.length; }
  return {
    season, ar, ma, factors, memory: Math.max(ar.degree, ma.degree),
    count: arLags.length + seasonalArLags.length + maLags.length + seasonalMaLags.length,
  };
}

function product(plain: readonly number[], seasonal: readonly number[], cross: 1 | -1): Product {
  if (seasonal.length === 0) {
    const own = Int32Array.of(...plain);
    return { plain: own, seasonal: NONE, lags: own, cross, degree: plain.length > 0 ? plain[plain.length - 1] : 0, atPlain: Int32Array.of(...plain.keys()), atSeasonal: NONE, atCross: NONE };
  }
  const all = new Set<number>([...plain, ...seasonal]);
  for (const a of plain) for (const b of seasonal) all.add(a + b);
  const lags = Int32Array.from([...all].sort((a, b) => a - b));
  const at = new Map<number, number>();
  lags.forEach((lag, i) => at.set(lag, i));
  return {
    plain: Int32Array.from(plain), seasonal: Int32Array.from(seasonal), lags, cross,
    degree: lags.length > 0 ? lags[lags.length - 1] : 0,
    atPlain: Int32Array.from(plain, l => at.get(l)!),
    atSeasonal: Int32Array.from(seasonal, l => at.get(l)!),
    atCross: Int32Array.from(plain.flatMap(a => seasonal.map(b => at.get(a + b)!))),
  };
}

/** Multiplies the factors out. `from` is where the plain factor's coefficients start in `x`; the seasonal ones follow. */
export function expandInto(out: Float64Array, p: Product, x: Float64Array, from: number): void {
  out.fill(0);
  const plain = p.plain.length, seasonal = p.seasonal.length;
  for (let i = 0; i < plain; i++) out[p.atPlain[i]] += x[from + i];
  for (let j = 0; j < seasonal; j++) out[p.atSeasonal[j]] += x[from + plain + j];
  for (let i = 0; i < plain; i++) {
    for (let j = 0; j < seasonal; j++) out[p.atCross[i * seasonal + j]] += p.cross * x[from + i] * x[from + plain + j];
  }
}

/** Chain rule of `expandInto`: adds the gradient by factor coefficients to `gradient`, from that by product coefficients. */
export function contractInto(gradient: Float64Array, p: Product, x: Float64Array, from: number, byProduct: Float64Array): void {
  const plain = p.plain.length, seasonal = p.seasonal.length;
  for (let i = 0; i < plain; i++) {
    let sum = byProduct[p.atPlain[i]];
    for (let j = 0; j < seasonal; j++) sum += p.cross * x[from + plain + j] * byProduct[p.atCross[i * seasonal + j]];
    gradient[from + i] += sum;
  }
  for (let j = 0; j < seasonal; j++) {
    let sum = byProduct[p.atSeasonal[j]];
    for (let i = 0; i < plain; i++) sum += p.cross * x[from + i] * byProduct[p.atCross[i * seasonal + j]];
    gradient[from + plain + j] += sum;
  }
}

/** Coefficients of a factor in 1 + c_1 B' + ..., B' its own step (a season for seasonal factors of full lag sets). */
export function denseFactor(f: Factor, x: Float64Array): Float64Array {
  const step = f.lags.length > 0 && f.lags.every(l => l % f.lags[0] === 0) ? f.lags[0] : 1;
  const c = new Float64Array(f.lags.length > 0 ? f.lags[f.lags.length - 1] / step : 0);
  f.lags.forEach((lag, i) => { c[lag / step - 1] = -f.sign * x[f.from + i]; });
  return c;
}
