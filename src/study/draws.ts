import { evaluateNames } from "../compile/evaluate.js";
import type { Settings } from "../compile/plant.js";
import type { Fit } from "../fit/result.js";
import type { Named, Network } from "../model/network.js";
import { normalQuantile } from "../numerics/distributions.js";
import { random } from "../numerics/random.js";
import { columnFor, streamSeed } from "./streams.js";

const mostTries = 200;

/**
 * Values of a network that are possible: normal around the fitted values with the fit's covariance, inside bounds and
 * `requires:`; what the data cannot tell at all is spread evenly over its bounds. Constants, and parameters that were not
 * fitted, vary by their `±`.
 * @param fit      undefined: nothing was fitted, the values of the file hold
 * @param possible says whether a set makes a vessel
 * @returns `count` sets (SI, by name), the same for the same seed; fewer where hardly any set is possible
 */
export function parameterDraws(
  network: Network,
  fit: Fit | undefined,
  count: number,
  seed: number,
  possible: (settings: Settings) => boolean,
): Settings[] {
  const joint = jointly(network, fit, evaluateNames(network, fit?.values ?? {}));
  const columns = new Map(joint.names.map((name) => [name, columnFor(name, count, seed)]));
  const draws: Settings[] = [];
  for (let i = 0; i < count; i++) {
    let settings = joint.at((name) => columns.get(name)?.[i] ?? 0.5);
    if (!joint.inside(settings) || !possible(settings)) {
      // A stream of its own for each row: that one is drawn anew moves no other.
      const again = random(streamSeed(`row ${i}`, seed));
      let tries = 0;
      do {
        const drawn = new Map(joint.names.map((name) => [name, Math.max(again.uniform(), 2 ** -53)]));
        settings = joint.at((name) => drawn.get(name) ?? 0.5);
      } while ((!joint.inside(settings) || !possible(settings)) && ++tries < mostTries);
      if (tries === mostTries) continue;
    }
    draws.push(settings);
  }
  return draws;
}

/** Names of the network that a fit moved, sorted. */
export function fittedNames(network: Network, fit: Fit | undefined): string[] {
  const own = new Set(network.names.map((n) => n.name));
  return (fit?.covariance.names ?? []).filter((name) => own.has(name)).sort();
}

/** Names of constants and unfitted parameters that a network declares with a `±`. */
export function declaredNames(network: Network, fit: Fit | undefined): Named[] {
  const env = evaluateNames(network, fit?.values ?? {});
  const fitted = new Set(fit?.covariance.names ?? []);
  return network.names.filter(
    (n) => (n.role === "constant" || n.role === "parameter") && !fitted.has(n.name) && (n.value.sd?.(env) ?? 0) > 0,
  );
}

/** All that varies in a network as one function of a number in (0, 1) for each name. Names in an order of their own. */
function jointly(network: Network, fit: Fit | undefined, env: ArrayLike<number>) {
  const named = new Map(network.names.map((n) => [n.name, n]));
  const fitted = fittedNames(network, fit);
  const variance = (a: string, b: string): number =>
    fit?.covariance.rows[fit.covariance.names.indexOf(a)][fit.covariance.names.indexOf(b)] ?? Number.NaN;
  const known = fitted.filter((name) => Number.isFinite(variance(name, name)));
  const blind = fitted.filter((name) => !known.includes(name));
  const factor = cholesky(known.map((a) => known.map((b) => variance(a, b))));
  const declared = declaredNames(network, fit);
  const bounds = (name: string): readonly [number, number] => {
    const between = named.get(name)?.between;
    return between ? [between[0].of(env), between[1].of(env)] : [Number.NEGATIVE_INFINITY, Number.POSITIVE_INFINITY];
  };
  const bounded = [...fitted, ...declared.filter((n) => n.between).map((n) => n.name)];
  return {
    names: [...fitted, ...declared.map((n) => n.name)],
    at(uniform: (name: string) => number): Settings {
      const settings: Record<string, number> = { ...fit?.values };
      const z = known.map((name) => normalQuantile(uniform(name)));
      known.forEach((name, i) => {
        for (let j = 0; j <= i; j++) settings[name] += factor[i][j] * z[j];
      });
      for (const name of blind) {
        const [low, high] = bounds(name);
        if (Number.isFinite(high - low)) {
          settings[name] = spread(low, high, named.get(name)?.spacing === "log", uniform(name));
        }
      }
      for (const { name, slot, value } of declared) {
        settings[name] = env[slot] + (value.sd?.(env) ?? 0) * normalQuantile(uniform(name));
      }
      return settings;
    },
    inside: (settings: Settings): boolean =>
      bounded.every((name) => settings[name] >= bounds(name)[0] && settings[name] <= bounds(name)[1]),
  };
}

const spread = (low: number, high: number, log: boolean, u: number): number =>
  log ? low * (high / low) ** u : low + (high - low) * u;

/** Lower factor L with L L' = C of a covariance; a direction without spread gives a row of zeros. */
function cholesky(c: readonly (readonly number[])[]): number[][] {
  const l = c.map(() => new Array<number>(c.length).fill(0));
  for (let i = 0; i < c.length; i++) {
    for (let j = 0; j <= i; j++) {
      let sum = c[i][j];
      for (let k = 0; k < j; k++) sum -= l[i][k] * l[j][k];
      if (i === j) l[i][i] = Math.sqrt(Math.max(0, sum));
      else l[i][j] = l[j][j] > 0 ? sum / l[j][j] : 0;
    }
  }
  return l;
}

/** A quantity that varies by a declared standard deviation. SI. */
export interface Declared {
  readonly name: string;
  readonly value: number;
  readonly sd: number;
}

/** Values that vary by a declared standard deviation, one set per draw; each name has a stream of its own, so draws are shared. */
export function declaredDraws(inputs: readonly Declared[], count: number, seed: number): Settings[] {
  const columns = inputs.map(({ name }) => columnFor(name, count, seed));
  return Array.from({ length: count }, (_, i) =>
    Object.fromEntries(inputs.map(({ name, value, sd }, k) => [name, value + sd * normalQuantile(columns[k][i])])),
  );
}

/** A concentration or constant does not change its sign, however wide its `±`. */
export const sameSide = (middle: number, drawn: number): number =>
  middle < 0 ? Math.min(0, drawn) : Math.max(0, drawn);
