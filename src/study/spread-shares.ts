import { evaluateNames } from "../compile/evaluate.js";
import type { Fit } from "../fit/result.js";
import { additiveShares } from "../numerics/additive-shares.js";
import { sobolIndices } from "../numerics/sobol-indices.js";
import { dutyInputs, networkSettings } from "../reaction/conditions.js";
import { declaredNames } from "./draws.js";
import { noRow, type Operation, type Row, valuesAt } from "./operate.js";
import { drawnValue, mixedRow, type Source, sourcesOf } from "./sources.js";

/** An uncertain input, or the fit as a whole, and how much of a figure's variance it holds. */
export interface Driver extends Source {
  /** First-order share of the variance, 0 to 1: what would go if this alone were known. Shares add up to at most 1. */
  readonly share: number;
  /** With all in which it takes part; only from pick-freeze. */
  readonly total: number | undefined;
  /** The share by slopes at the middle alone (first-order error propagation): the cross-check. */
  readonly linear: number | undefined;
}

/** What makes a figure unsure. */
export interface Spread {
  /** `regression` where a sum over the inputs explains the draws; else `pick-freeze`, with runs of its own. */
  readonly method: "regression" | "pick-freeze";
  /** Share of the variance that the regression explains, 0 to 1. */
  readonly explained: number | undefined;
  /** Standard deviation of the figure over the draws, and by slopes alone. SI. */
  readonly sd: number;
  readonly linearSd: number | undefined;
  /** Most first; what holds less than half a percent is left out. */
  readonly drivers: readonly Driver[];
}

/** A regression that explains less than this is not trusted. */
const enough = 0.95;
/** Shares below this are not told. */
const least = 0.005;
const fewestRows = 20;

/**
 * What holds the variance of each figure of a duty. By regression on the draws that there are; figures that this does not
 * explain are gone into by pick-freeze on their two halves (one run more per source and pair of draws).
 * @param rows   as `rowsFor` gives them
 * @param values the figures at each row, undefined where there are none
 * @returns      per figure; undefined where nothing varies or too few draws gave a figure
 */
export function spreadsOf(
  operation: Operation,
  fit: Fit | undefined,
  rows: readonly Row[],
  values: readonly (readonly number[] | undefined)[],
): (Spread | undefined)[] {
  const sources = sourcesOf(operation, fit);
  const slopes = linearShares(operation, fit, sources);
  let frozen: (number[] | undefined)[][] | undefined;
  const half = Math.floor(rows.length / 2);
  // Only where a regression falls short.
  const mixed = (): (number[] | undefined)[][] => {
    frozen ??= sources.map((source) =>
      Array.from({ length: half }, (_, i) => valuesAt(operation, mixedRow(rows[i], rows[half + i], source))),
    );
    return frozen;
  };
  return operation.duty.report.map((_, k): Spread | undefined => {
    const y = values.map((v) => v?.[k] ?? Number.NaN);
    const whole = rows.flatMap((_, i) => (Number.isFinite(y[i]) ? [i] : []));
    if (whole.length < fewestRows || sources.length === 0) return undefined;
    const sd = deviation(whole.map((i) => y[i]));
    if (!(sd > 1e-12 * Math.abs(y[whole[0]]))) return undefined;
    const column = (name: string, of: "vessel" | "duty"): number[] => whole.map((i) => drawnValue(rows[i], name, of));
    const regression = additiveShares(
      sources.map((s) => [...s.vessel.map((n) => column(n, "vessel")), ...s.duty.map((n) => column(n, "duty"))]),
      whole.map((i) => y[i]),
    );
    const linear = slopes?.figures[k];
    const told = (method: Spread["method"], explained: number | undefined, of: readonly Held[]): Spread => ({
      method,
      explained,
      sd,
      linearSd: linear?.sd,
      drivers: sources
        .map((s, j): Driver => ({ ...s, ...of[j], linear: linear?.shares[j] }))
        .filter((d) => Math.max(d.share, d.total ?? 0) >= least)
        .sort((a, b) => b.share - a.share),
    });
    if (regression && regression.explained >= enough) {
      const held = regression.shares.map((share): Held => ({ share, total: undefined }));
      return told("regression", regression.explained, held);
    }
    const [a, b] = [y.slice(0, half), y.slice(half, 2 * half)];
    const indices = mixed().map((runs) =>
      sobolIndices(
        a,
        b,
        runs.map((v) => v?.[k] ?? Number.NaN),
      ),
    );
    const held = indices.map((i): Held => ({ share: Math.max(0, i?.first ?? 0), total: i?.total ?? 0 }));
    return told("pick-freeze", regression?.explained, atMostOne(held));
  });
}

type Held = Pick<Driver, "share" | "total">;

/** First-order shares add up to at most 1; what is over is chance. */
function atMostOne(held: readonly Held[]): Held[] {
  const sum = held.reduce((s, h) => s + h.share, 0);
  return held.map((h) => (sum > 1 ? { ...h, share: h.share / sum } : h));
}

/** Shares of the variance by slopes at the middle: g' C g of each source over the sum. */
function linearShares(
  operation: Operation,
  fit: Fit | undefined,
  sources: readonly Source[],
): { figures: { sd: number; shares: number[] }[] } | undefined {
  const { network, duty, kinetics } = operation;
  const middle = valuesAt(operation, noRow);
  if (!middle) return undefined;
  const env = evaluateNames(network, operation.values);
  const slot = new Map(network.names.map((n) => [n.name, n.slot]));
  const declared = new Map(declaredNames(network, fit).map((n) => [n.name, n.value.sd?.(env) ?? 0]));
  const inputs = new Map(dutyInputs(duty.chemistry, duty).map((i) => [i.name, i]));
  const set = networkSettings(duty);
  const feedSd = new Map(network.feeds.map((f) => [`${f.name}.flow`, f.flow.sd?.(env) ?? 0]));
  const fitName = new Map([...kinetics].map(([name, constant]) => [constant, name]));
  const place = (name: string): number => fit?.covariance.names.indexOf(fitName.get(name) ?? name) ?? -1;
  const covariance = (a: string, b: string): number => {
    const [i, j] = [place(a), place(b)];
    if (i >= 0 && j >= 0) return fit?.covariance.rows[i][j] ?? Number.NaN;
    if (a !== b) return 0;
    return (inputs.get(a)?.sd ?? declared.get(a) ?? feedSd.get(a) ?? Number.NaN) ** 2;
  };
  const slopeBy = (name: string, half: "vessel" | "duty"): number[] | undefined => {
    const value =
      inputs.get(name)?.value ?? duty.with.get(name)?.value.of([]) ?? set[name] ?? env[slot.get(name) ?? -1];
    const step = 0.02 * Math.sqrt(covariance(name, name));
    const at = (x: number): number[] | undefined => valuesAt(operation, { ...noRow, [half]: { [name]: x } });
    const [up, down] = [at(value + step), at(value - step)];
    // At a bound of what is possible, from one side.
    if (up && down) return up.map((u, k) => (u - down[k]) / (2 * step));
    if (up) return up.map((u, k) => (u - middle[k]) / step);
    return down?.map((d, k) => (middle[k] - d) / step);
  };
  const gradients = sources.map((s) => [
    ...s.vessel.map((n) => ({ n, g: slopeBy(n, "vessel") })),
    ...s.duty.map((n) => ({ n, g: slopeBy(n, "duty") })),
  ]);
  const figures = middle.map((_, k) => {
    const variances = gradients.map((own) =>
      own.reduce((sum, a) => {
        return own.reduce(
          (s, b) => s + (a.g?.[k] ?? Number.NaN) * covariance(a.n, b.n) * (b.g?.[k] ?? Number.NaN),
          sum,
        );
      }, 0),
    );
    const whole = variances.reduce((s, v) => s + v, 0);
    return { sd: Math.sqrt(whole), shares: variances.map((v) => v / whole) };
  });
  return { figures };
}

function deviation(values: readonly number[]): number {
  const mean = values.reduce((s, v) => s + v, 0) / values.length;
  return Math.sqrt(values.reduce((s, v) => s + (v - mean) ** 2, 0) / (values.length - 1));
}
