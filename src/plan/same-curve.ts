import { compile, compiler } from "../compile/compile.js";
import type { Plant, Settings } from "../compile/plant.js";
import { coordinateOf } from "../fit/coordinates.js";
import type { Network } from "../model/network.js";
import { leastSquares } from "../numerics/least-squares.js";
import { lowDiscrepancy } from "../numerics/low-discrepancy.js";
import { transferFunction } from "../transfer/transfer-function.js";
import type { Unit } from "../units/unit.js";

/** A network of the library that shows the same curve at the outlet though it is another vessel. */
export interface SameCurve {
  readonly title: string;
  readonly path: string;
  readonly parameters: readonly {
    readonly name: string;
    readonly value: number;
    readonly unit: Unit;
    readonly about: string | undefined;
  }[];
  /** All settings with which it does, SI. */
  readonly settings: Settings;
  /** Largest difference of the transfer functions, of 1. */
  readonly difference: number;
}

/** Transfer functions that differ by less are of one curve: what is left is the rounding of a descent. */
const same = 1e-8;
const starts = 8;
/** A rough descent that comes so near is worth a full one. */
const near = 1e-4;

/**
 * Networks of a library with the same exit-age distribution as a vessel of one feed and one outlet: each is given its volume
 * and flow, and its parameters are sought until the transfer functions agree at points over two decades to both sides of the mean
 * time. Networks with the same links between the same volumes are the vessel itself, and left out.
 * @param library  networks with a constant `total` and one feed, as those of shared/parts
 * @see R. Bellman, K. J. Åström, Math. Biosci. 7 (1970) 329-339, for structural identifiability (from memory)
 */
export function sameCurves(plant: Plant, library: readonly Network[]): SameCurve[] {
  const [feed] = plant.feeds;
  const [outlet] = plant.outlets;
  if (plant.feeds.length !== 1 || plant.outlets.length !== 1 || plant.columns.size > mostNodes) return [];
  const mean = plant.volume.active / feed.flow;
  if (!(mean > 0) || !Number.isFinite(mean)) return [];
  const points = Float64Array.from({ length: 25 }, (_, k) => 10 ** (-2 + k / 6) / mean);
  const target = transferFunction(plant, points)[outlet.name];
  if (!target.every(Number.isFinite)) return [];
  const own = signature(plant);
  return library.flatMap((network): SameCurve[] => {
    const found = nearest(network, plant.volume.total, feed.flow, points, target);
    if (!found || found.difference > same) return [];
    const other = compile(network, found.settings).plant;
    return other && signature(other) !== own ? [found] : [];
  });
}

/** Vessels of more primitive nodes are no rivals of a part. */
const mostNodes = 200;

function nearest(
  network: Network,
  total: number,
  flow: number,
  points: Float64Array,
  target: Float64Array,
): SameCurve | undefined {
  const [feed] = network.feeds;
  if (network.feeds.length !== 1 || network.outlets.length !== 1 || !network.names.some((n) => n.name === "total"))
    return undefined;
  const given = { total, [`${feed.name}.flow`]: flow };
  const { compile: at } = compiler(network);
  const env = at(given).plant?.env;
  if (!env) return undefined;
  const coordinates = network.names.filter((n) => n.role === "parameter").map((n) => coordinateOf(network, n, env));
  const settingsAt = (u: ArrayLike<number>): Record<string, number> => ({
    ...given,
    ...Object.fromEntries(coordinates.map((c, j) => [c.name, c.toSi(u[j])])),
  });
  const missing = points.map(() => Number.NaN);
  const residuals = (u: ArrayLike<number>): Float64Array => {
    const { plant } = at(settingsAt(u));
    const g = plant && transferFunction(plant, points)[network.outlets[0].name];
    return g ? g.map((v, i) => v - target[i]) : missing;
  };
  const descend = (start: ArrayLike<number>, tolerance: number): { u: Float64Array; difference: number } => {
    const { parameters: u } = leastSquares({
      residuals: (x) => Array.from(residuals(x)),
      start: Array.from(start),
      lower: coordinates.map((c) => c.from),
      upper: coordinates.map((c) => c.to),
      scale: coordinates.map(() => 1),
      tolerance,
      polish: false,
      maxEvaluations: 40 * (coordinates.length + 1),
    });
    return { u, difference: residuals(u).reduce((m, r) => Math.max(m, Math.abs(r)), 0) };
  };
  const draw = lowDiscrepancy(Math.max(1, coordinates.length), 1);
  let best: { u: Float64Array; difference: number } | undefined;
  for (let k = 0; k < starts && coordinates.length > 0; k++) {
    const start = draw();
    const end = descend(
      coordinates.map(({ draw: [a, b] }, j) => a + start[j] * (b - a)),
      1e-4,
    );
    if (Number.isFinite(end.difference) && (!best || end.difference < best.difference)) best = end;
    if (best && best.difference < near) break;
  }
  if (best && best.difference < 10 * near) best = descend(best.u, 1e-14);
  // At a bound a network is a simpler one, which speaks for itself.
  const inside = best?.u.every((u, j) => u > coordinates[j].from + 1e-6 && u < coordinates[j].to - 1e-6);
  if (!best || !inside) return undefined;
  const settings = settingsAt(best.u);
  const parameters = coordinates.map((c) => ({
    name: c.name,
    value: settings[c.name],
    unit: c.unit,
    about: c.named.about,
  }));
  return { title: network.title, path: network.at.source.path, parameters, settings, difference: best.difference };
}

/** Its links, each by the volumes that it joins and its flow, to six digits. */
function signature({ columns: { volume }, from, to, flow, feeds }: Plant): string {
  const whole = volume.reduce((s, v) => s + v, 0);
  const through = feeds.reduce((s, f) => s + f.flow, 0);
  const part = (x: number): string => x.toExponential(4);
  return Array.from(flow, (q, i) => [volume[from[i]] / whole, volume[to[i]] / whole, q / through])
    .filter(([, , q]) => q > 1e-9)
    .map((link) => link.map(part).join(" "))
    .sort()
    .join("; ");
}
