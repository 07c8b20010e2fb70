import { evaluateNames } from "../compile/evaluate.js";
import { fit } from "../fit/fit.js";
import type { Fit, FittedParameter } from "../fit/result.js";
import type { Network } from "../model/network.js";
import type { Trial } from "../model/trial.js";
import { fCdf } from "../numerics/distributions.js";
import { asLogged } from "../plan/expected.js";

/** A rival that is a special case of another, and whether the data ask for what the other has more. */
export interface Nested {
  /** Titles. */
  readonly special: string;
  readonly general: string;
  readonly f: number;
  /** Further parameters, and degrees of freedom left. */
  readonly freedom: readonly [number, number];
  /** Probability of such an F were the special case the truth. */
  readonly p: number;
  /** The special case lies at a bound of the general one, where F asks for somewhat too much (see the reference). */
  readonly atBound: boolean;
}

interface Fitted {
  readonly title: string;
  readonly network: Network;
  readonly fit: Fit;
}

/**
 * F tests between rivals of which one is a special case of the other: that is looked for, not declared. The general one must
 * reproduce the fitted curves of the special one so well that the data could not tell. Where its residuals hang together the
 * degrees of freedom are those of the effective number of readings, and F shrinks by the same.
 * @see N. R. Draper, H. Smith, Applied Regression Analysis, 3rd ed. 1998, section 9.1; at bounds: S. G. Self, K.-Y. Liang, J. Am.
 *      Statist. Assoc. 82 (1987) 605-610 (both from memory)
 */
export function nestedTests(rivals: readonly Fitted[], trials: readonly Trial[], seed: number): Nested[] {
  if (trials.some((t) => t.reacting)) return [];
  return rivals.flatMap((special) =>
    rivals.flatMap((general) => {
      const more = general.fit.freeParameters - special.fit.freeParameters;
      return more > 0 ? (testOf(special, general, more, trials, seed) ?? []) : [];
    }),
  );
}

function testOf(
  special: Fitted,
  general: Fitted,
  more: number,
  trials: readonly Trial[],
  seed: number,
): Nested | undefined {
  const { fit: own } = general;
  const weighed = (residuals: readonly Float64Array[]): number =>
    own.readings.reduce((sum, r, k) => {
      for (let i = 0; i < residuals[k].length; i++) sum += (residuals[k][i] * r.weight[i]) ** 2;
      return sum;
    }, 0);
  const comparable = own.readings.every((r, k) => special.fit.readings[k]?.residual.length === r.residual.length);
  const left = own.observations - own.freeParameters;
  if (!comparable || left <= 0) return undefined;
  const least = weighed(own.readings.map((r) => r.residual));
  const variance = least / left;
  const logged = loggedAs(special.fit, trials);
  const { fit: again } = fit(general.network, logged, { seed, asItStands: true });
  if (!again) return undefined;
  // What is left of the special curves, in the variance that the data have: far less than one parameter would make of chance.
  if (weighed(again.readings.map((r) => r.residual)) > 0.1 * variance) return undefined;
  const finding = own.findings.find((f) => f.code === "residuals-correlated");
  const share = finding ? Number(finding.evidence.effective) / own.observations : 1;
  const freedom = Math.max(1, share * own.observations - own.freeParameters);
  const gained = weighed(special.fit.readings.map((r) => r.residual)) - least;
  const f = (Math.max(0, gained) * share) / more / variance;
  return {
    special: special.title,
    general: general.title,
    f,
    freedom: [more, freedom],
    p: 1 - fCdf(f, more, freedom),
    atBound: again.parameters.some((p) => p.atBound !== undefined || nearBound(general.network, again, p)),
  };
}

/** Within a thousandth of its range of a bound: a descent over exact data ends where rounding lets it. */
function nearBound(network: Network, { values }: Fit, { name, value }: FittedParameter): boolean {
  const between = network.names.find((n) => n.name === name)?.between;
  if (!between) return false;
  const env = evaluateNames(network, values);
  const [low, high] = between.map((b) => b.of(env));
  return Math.min(value - low, high - value) < 1e-3 * (high - low);
}

/** The trials as the special network would have them. */
function loggedAs({ readings }: Fit, trials: readonly Trial[]): Trial[] {
  let next = 0;
  return trials.map((trial) => {
    const read = trial.readings.filter((r) => r.series && r.series.time.length > 0);
    const own = read.map(() => readings[next++]);
    const whole = { ...trial, readings: read };
    return own.every(Boolean)
      ? asLogged(
          whole,
          own.map((r) => r.time),
          own.map((r) => r.fitted),
        )
      : whole;
  });
}
