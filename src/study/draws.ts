import { evaluateNames } from "../compile/evaluate.js";
import type { Settings } from "../compile/plant.js";
import type { Fit } from "../fit/result.js";
import type { Network } from "../model/network.js";
import { type Random, random } from "../numerics/random.js";

const mostTries = 200;

/**
 * Parameter sets that the fit leaves possible: normal around the fitted values with the fit's covariance, inside bounds
 * and `requires:`; what the data cannot tell at all is spread evenly over its bounds. Constants with a `±` vary by it.
 * @param possible says whether a set makes a vessel
 * @returns `count` sets (SI, by name), the same for the same seed; fewer where hardly any set is possible
 */
export function parameterDraws(
  network: Network,
  fit: Fit,
  count: number,
  seed: number,
  possible: (settings: Settings) => boolean,
): Settings[] {
  const source = random(seed);
  const env = evaluateNames(network, fit.values);
  const named = new Map(network.names.map((n) => [n.name, n]));
  const known = fit.covariance.names.filter((_, i) => Number.isFinite(fit.covariance.rows[i][i]));
  const factor = cholesky(known.map((a) => known.map((b) => fit.covariance.rows[indexOf(fit, a)][indexOf(fit, b)])));
  const blind = fit.covariance.names.filter((n) => !known.includes(n));
  const bounds = (name: string): readonly [number, number] => {
    const between = named.get(name)?.between;
    return between ? [between[0].of(env), between[1].of(env)] : [Number.NEGATIVE_INFINITY, Number.POSITIVE_INFINITY];
  };
  const constants = network.names.filter((n) => n.role === "constant" && (n.value.sd?.(env) ?? 0) > 0);
  const draw = (): Settings => {
    const settings: Record<string, number> = { ...fit.values };
    const z = known.map(() => source.normal());
    known.forEach((name, i) => {
      for (let j = 0; j <= i; j++) settings[name] += factor[i][j] * z[j];
    });
    for (const name of blind) {
      const [low, high] = bounds(name);
      if (Number.isFinite(high - low)) settings[name] = spread(low, high, named.get(name)?.spacing === "log", source);
    }
    for (const c of constants) settings[c.name] = env[c.slot] + (c.value.sd?.(env) ?? 0) * source.normal();
    return settings;
  };
  const inside = (settings: Settings): boolean =>
    fit.covariance.names.every((n) => settings[n] >= bounds(n)[0] && settings[n] <= bounds(n)[1]) && possible(settings);
  const draws: Settings[] = [];
  for (let i = 0; i < count; i++) {
    for (let tries = 0; tries < mostTries; tries++) {
      const settings = draw();
      if (!inside(settings)) continue;
      draws.push(settings);
      break;
    }
  }
  return draws;
}

const indexOf = (fit: Fit, name: string): number => fit.covariance.names.indexOf(name);

function spread(low: number, high: number, log: boolean, source: Random): number {
  const u = source.uniform();
  return log ? low * (high / low) ** u : low + (high - low) * u;
}

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

/** Values that vary by a declared standard deviation, one set per draw; each name has a stream of its own, so draws are shared. */
export function declaredDraws(
  inputs: readonly { readonly name: string; readonly value: number; readonly sd: number }[],
  count: number,
  seed: number,
): Settings[] {
  const streams = inputs.map((input) => ({ input, source: random(seed + nameSeed(input.name)) }));
  return Array.from({ length: count }, () =>
    Object.fromEntries(streams.map(({ input, source }) => [input.name, input.value + input.sd * source.normal()])),
  );
}

function nameSeed(name: string): number {
  let h = 7;
  for (const c of name) h = (h * 31 + (c.codePointAt(0) ?? 0)) % 1_000_003;
  return h * 1000;
}
