import { evaluateNames } from "../compile/evaluate.js";
import type { Chemistry } from "../model/chemistry.js";
import type { Named, Network } from "../model/network.js";
import type { Trial } from "../model/trial.js";
import type { Value } from "../model/value.js";

/** The chemistries of trials, each file once. */
export function chemistriesOf(trials: readonly Trial[]): Chemistry[] {
  const all = new Map<string, Chemistry>();
  for (const { reacting } of trials) if (reacting) all.set(reacting.chemistry.path, reacting.chemistry);
  return [...all.values()];
}

/**
 * A network with the parameters of the chemistries of its trials among its own, so that a fit moves them alike: by their own
 * name or, where the network or another chemistry has that name, with that of the file before it (`hydrolysis.k1`).
 */
export function withKinetics(network: Network, trials: readonly Trial[]): Network {
  const chemistries = chemistriesOf(trials);
  if (chemistries.length === 0 || network.names.some((n) => n.chemistry)) return network;
  const free = chemistries.flatMap((c) => c.constants.filter((p) => p.free).map((p) => ({ c, p })));
  const taken = [...network.names.map((n) => n.name), ...free.map(({ p }) => p.name)];
  const isAlone = (name: string): boolean => taken.indexOf(name) === taken.lastIndexOf(name);
  const added = free.map(({ c, p }): Named => {
    const env = startOf(c);
    const number = (value: Value): Value => {
      const [x, sd] = [value.of(env), value.sd?.(env)];
      return { ...value, uses: [], of: () => x, sd: sd === undefined ? undefined : () => sd };
    };
    const between = p.free?.between;
    return {
      name: isAlone(p.name) ? p.name : `${stemOf(c.path)}.${p.name}`,
      slot: -1,
      role: "parameter",
      at: p.at,
      value: number(p.value),
      between: between && [number(between[0]), number(between[1])],
      spacing: p.free?.spacing ?? "linear",
      about: p.free?.about,
      chemistry: { path: c.path, name: p.name },
    };
  });
  return joined(network, added);
}

function joined(network: Network, added: readonly Named[]): Network {
  if (added.length === 0) return network;
  const first = evaluateNames(network).length;
  const own = added.map((named, i) => ({ ...named, slot: first + i }));
  return { ...network, names: [...network.names, ...own], order: [...network.order, ...own.map((n) => n.slot)] };
}

const stemOf = (path: string): string => path.slice(path.lastIndexOf("/") + 1).replace(/\.ya?ml$/, "");

/** Constants as the file has them, without species and temperature: what numbers of parameters are read with. */
function startOf(chemistry: Chemistry): Float64Array {
  const n = chemistry.species.length;
  const env = new Float64Array(chemistry.temperatureSlot + 1).fill(Number.NaN);
  for (const k of chemistry.order) env[n + k] = chemistry.constants[k].value.of(env);
  return env;
}

/**
 * Values of the parameters of a chemistry under the names that it has for them itself; SI.
 * @param network with the parameters among its own
 */
export function constantsIn(
  network: Network,
  chemistry: Chemistry,
  values: Readonly<Record<string, number>>,
): Record<string, number> {
  const own: Record<string, number> = {};
  for (const { name, chemistry: from } of network.names)
    if (from?.path === chemistry.path && name in values) own[from.name] = values[name];
  return own;
}
