// Minimises a smooth function of a few numbers whose gradient is only known by differences.

export interface Minimum { readonly at: Float64Array; readonly value: number; readonly converged: boolean; readonly passes: number }

/** BFGS with gradients by central differences and step halving. Infinity marks places that may not be entered.
 *  @param f      the function; called about 2 * size times an iteration
 *  @param start  where f is finite
 *  @param step   size of a first step, and (times 1e-4) of the differences, in each direction
 *  Source: Nocedal & Wright (2006), algorithm 6.1. */
export function minimise(f: (x: Float64Array) => number, start: Float64Array, { step = 0.1, tolerance = 1e-10, maxIterations = 200 } = {}): Minimum {
  const size = start.length;
  let x = Float64Array.from(start), value = f(x), passes = 1;
  if (size === 0 || !Number.isFinite(value)) return { at: x, value, converged: size === 0, passes };
  let gradient = slope(f, x, value, step * 1e-4);
  let inverse = identity(size, step / Math.max(1e-12, norm(gradient)));
  let quiet = 0;
  for (let iteration = 0; iteration < maxIterations; iteration++) {
    passes += 2 * size;
    let direction = times(inverse, gradient);
    if (!(inner(direction, gradient) < 0)) {
      inverse = identity(size, step / Math.max(1e-12, norm(gradient)));
      direction = times(inverse, gradient);
    }
    // No step is longer than 2 in any direction: on the scales used here that is across the whole region.
    const longest = Math.max(...direction.map(Math.abs));
    let share = longest > 2 ? 2 / longest : 1, next = x, nextValue = Infinity;
    const descent = inner(direction, gradient);
    for (let halving = 0; halving < 30; halving++, share /= 2) {
      next = x.map((v, i) => v + share * direction[i]);
      nextValue = f(next); passes++;
      if (nextValue <= value + 1e-4 * share * descent) break;
    }
    if (!(nextValue < value)) return { at: x, value, converged: true, passes };
    const moved = next.map((v, i) => v - x[i]), nextGradient = slope(f, next, nextValue, step * 1e-4);
    const change = nextGradient.map((g, i) => g - gradient[i]);
    quiet = value - nextValue <= tolerance * (Math.abs(value) + tolerance) ? quiet + 1 : 0;
    x = next; value = nextValue; gradient = nextGradient;
    if (quiet >= 2) return { at: x, value, converged: true, passes };
    updateInto(inverse, moved, change);
  }
  return { at: x, value, converged: false, passes };
}

function slope(f: (x: Float64Array) => number, x: Float64Array, value: number, step: number): Float64Array {
  const probe = Float64Array.from(x);
  return x.map((v, i) => {
    const d = step * Math.max(1, Math.abs(v));
    probe[i] = v + d;
    const up = f(probe);
    probe[i] = v - d;
    const down = f(probe);
    probe[i] = v;
    if (Number.isFinite(up) && Number.isFinite(down)) return (up - down) / (2 * d);
    return Number.isFinite(up) ? (up - value) / d : Number.isFinite(down) ? (value - down) / d : 0;
  });
}

/** The BFGS update of the inverse Hessian, skipped where the curvature along the step is not positive. */
function updateInto(inverse: Float64Array, moved: Float64Array, change: Float64Array): void {
  const size = moved.length, curvature = inner(moved, change);
  if (!(curvature > 1e-12 * norm(moved) * norm(change))) return;
  const spread = times(inverse, change).map((v) => -v), through = 1 + inner(change, spread) / curvature;
  for (let i = 0; i < size; i++) {
    for (let j = 0; j < size; j++) inverse[i * size + j] += (through * moved[i] * moved[j] - spread[i] * moved[j] - moved[i] * spread[j]) / curvature;
  }
}

function identity(size: number, scale: number): Float64Array {
  const m = new Float64Array(size * size);
  for (let i = 0; i < size; i++) m[i * size + i] = scale;
  return m;
}

/** Minus the matrix times the vector. */
function times(m: Float64Array, v: Float64Array): Float64Array {
  const size = v.length;
  return v.map((_, i) => { let sum = 0; for (let j = 0; j < size; j++) sum -= m[i * size + j] * v[j]; return sum; });
}

function inner(a: Float64Array, b: Float64Array): number { let sum = 0; for (let i = 0; i < a.length; i++) sum += a[i] * b[i]; return sum; }
function norm(a: Float64Array): number { return Math.sqrt(inner(a, a)); }
