/** Equal to a sum of stirred tanks side by side: tank k lets `weight[k]` of what enters through, with `rate[k]` of its turnover. */
export interface ExponentialSum {
  readonly rate: Float64Array;
  readonly weight: Float64Array;
}

/** Steps in the logarithm of the rate. The trapezoidal rule is off by the gamma function at 2 pi i / step: about 1e-11. */
const laminarStep = 0.3;
const step = 0.38;

/**
 * The undelayed curve of laminar flow, 2 / (1 + y)^3 over y = (t - tau/2) / (tau/2), as a sum of exponentials: the integral of
 * r e^-r * r e^(-r y) over all rates r, by the trapezoidal rule in ln r. All weights are positive.
 * @see G. Beylkin, L. Monzón, Appl. Comput. Harmon. Anal. 19 (2005) 17-48
 */
export function laminarSum(): ExponentialSum {
  const rate: number[] = [];
  const weight: number[] = [];
  for (let x = -13; x <= 3.8; x += laminarStep) {
    const r = Math.exp(x);
    rate.push(r);
    weight.push(laminarStep * r * r * Math.exp(-r));
  }
  return wholeSum(rate, weight);
}

/** Rates beyond this are one: nothing is asked that soon. */
const fastest = 1e15;
/** Excess rates below this are none. */
const slowest = 1e-10;

/**
 * The transfer function (1 + z)^-a, 0 < a < 1, as a positive sum of w / (1 + z / r): the integral of
 * sin(pi a) / pi * u^-a / (u + 1 + z) over u, r = 1 + u, by the trapezoidal rule in ln u.
 * @see G. Beylkin, L. Monzón, Appl. Comput. Harmon. Anal. 19 (2005) 17-48
 */
export function fractionSum(a: number): ExponentialSum {
  const rate: number[] = [];
  const weight: number[] = [];
  const factor = (step * Math.sin(Math.PI * a)) / Math.PI;
  const low = Math.log(slowest);
  // What lies below: a geometric series, in a tank of rate 1.
  rate.push(1);
  weight.push((factor * Math.exp((1 - a) * low)) / Math.expm1((1 - a) * step));
  for (let x = low; x <= Math.log(fastest); x += step) {
    const u = Math.exp(x);
    const w = (factor * Math.exp((1 - a) * x)) / (1 + u);
    if (u > 1 && w < 1e-14) break;
    rate.push(1 + u);
    weight.push(w);
  }
  const left = 1 - weight.reduce((sum, w) => sum + w, 0);
  if (left > 0) {
    rate.push(fastest);
    weight.push(left);
  }
  return wholeSum(rate, weight);
}

/** Weights that add to 1 but for rounding, made to. */
function wholeSum(rate: readonly number[], weight: readonly number[]): ExponentialSum {
  const total = weight.reduce((sum, w) => sum + w, 0);
  return { rate: Float64Array.from(rate), weight: Float64Array.from(weight, (w) => w / total) };
}
