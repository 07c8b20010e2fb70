import { evaluateNames } from "../compile/evaluate.js";
import type { Settings } from "../compile/plant.js";
import type { Fit } from "../fit/result.js";
import type { Duty } from "../model/duty.js";
import type { Network } from "../model/network.js";
import { dutyInputs, networkSettings } from "../reaction/conditions.js";
import { type Declared, declaredDraws, declaredNames, fittedNames, sameSide } from "./draws.js";
import type { Operation, Row } from "./operate.js";

/** What is known about where an uncertain input comes from: how to learn more of it follows. */
export type SourceKind = "fit" | "vessel" | "flow" | "kinetics" | "feed" | "heat" | "temperature";

/** Inputs that are unsure together, independently of all others: the fitted parameters as one, every declared `±` by itself. */
export interface Source {
  readonly kind: SourceKind;
  /** What people call it: `k2`, `feed.flow`; of the fit all its names. */
  readonly name: string;
  /** Names in `Row.vessel`. */
  readonly vessel: readonly string[];
  /** Names in `Row.duty`. */
  readonly duty: readonly string[];
}

/**
 * One row of values per draw: what the fit leaves open and what network, duty and chemistry declare with a `±`; the duty's
 * own values come before the network's. Draws of one name are shared by all networks and duties.
 */
export function rowsFor(
  { network, duty, values, kinetics }: Operation,
  settings: readonly Settings[],
  seed: number,
): Row[] {
  const env = evaluateNames(network, values);
  const made = network.names.filter((n) => n.value.uses.length > 0 && n.value.sd && n.role !== "feed-flow");
  const inputs = onlyDuty(duty);
  const follows = new Set(
    (duty.chemistry?.constants ?? [])
      .filter(({ name, value }) => value.uses.length > 0 && !duty.with.has(name))
      .map((c) => c.name),
  );
  const own = declaredDraws(inputs, settings.length, seed);
  const sd = new Map(inputs.map((i) => [i.name, i]));
  const days = declaredDraws(declaredFlows(network, duty), settings.length, seed);
  const set = networkSettings(duty);
  return settings.map((drawn, i): Row => {
    const vessel: Record<string, number> = { ...drawn };
    const offVessel: Record<string, number> = {};
    for (const { name, slot, value } of made) {
      if (vessel[name] === undefined || values[name] !== undefined) continue;
      offVessel[name] = (vessel[name] - env[slot]) / (value.sd?.(env) || 1);
      delete vessel[name];
    }
    const inDuty: Record<string, number> = { ...own[i] };
    for (const { name, value } of inputs) inDuty[name] = sameSide(value, inDuty[name]);
    for (const [name, constant] of kinetics) if (name in drawn) inDuty[constant] = drawn[name];
    const offDuty: Record<string, number> = {};
    for (const name of follows) {
      const known = sd.get(name);
      if (!known) continue;
      offDuty[name] = (inDuty[name] - known.value) / known.sd;
      delete inDuty[name];
    }
    return { vessel: { ...vessel, ...set, ...days[i] }, duty: inDuty, off: { vessel: offVessel, duty: offDuty } };
  });
}

/** A drawn value of a row as a number to correlate with: as it is, or how far it is off what others make of it. */
export const drawnValue = ({ off, ...row }: Row, name: string, half: "vessel" | "duty"): number =>
  row[half][name] ?? off[half][name] ?? Number.NaN;

/** Everything that makes the figures of a duty unsure, in an order of its own. */
export function sourcesOf({ network, duty, kinetics }: Operation, fit: Fit | undefined): Source[] {
  const set = new Set(Object.keys(networkSettings(duty)));
  const fitted = fittedNames(network, fit).filter((name) => !set.has(name));
  const rates = [...kinetics.values()].sort();
  const one = (kind: SourceKind, name: string, place: "vessel" | "duty"): Source => ({
    kind,
    name,
    vessel: place === "vessel" ? [name] : [],
    duty: place === "duty" ? [name] : [],
  });
  const constants = new Set(duty.chemistry?.constants.map((c) => c.name) ?? []);
  const fed = new Set([...duty.feeds].flatMap(([feed, { species }]) => [...species.keys()].map((s) => `${feed}.${s}`)));
  const local = new Set([...(duty.local ?? [])].flatMap(([at, l]) => [...l.constants.keys()].map((c) => `${at}.${c}`)));
  const kindOf = (name: string): SourceKind => {
    if (constants.has(name) || local.has(name)) return "kinetics";
    if (fed.has(name) || fed.has(name.replace(/\.to$/, ""))) return "feed";
    return name === "temperature" || name.endsWith(".temperature") ? "temperature" : "heat";
  };
  const sources = [
    ...(fitted.length + rates.length > 0
      ? [{ kind: "fit" as const, name: [...fitted, ...rates].join(", "), vessel: fitted, duty: rates }]
      : []),
    ...declaredNames(network, fit).flatMap((n) => (set.has(n.name) ? [] : [one("vessel", n.name, "vessel")])),
    ...declaredFlows(network, duty).map(({ name }) => one(name.endsWith(".flow") ? "flow" : "vessel", name, "vessel")),
    ...onlyDuty(duty).map(({ name }) => one(kindOf(name), name, "duty")),
  ];
  return sources.sort((a, b) => (a.name < b.name ? -1 : a.name > b.name ? 1 : 0));
}

/** What the duty and its chemistry declare that is no value of the network. */
function onlyDuty(duty: Duty): Declared[] {
  const network = networkSettings(duty);
  return dutyInputs(duty.chemistry, duty).filter(({ name }) => !(name in network));
}

/** Flows and network values that the duty, or else the network, declares with a `±`. */
function declaredFlows(network: Network, duty: Duty): Declared[] {
  const env = evaluateNames(network);
  const of = (name: string, value: number, sd: number | undefined) => (sd && sd > 0 ? [{ name, value, sd }] : []);
  return [
    ...[...duty.flows].flatMap(([feed, { value }]) => of(`${feed}.flow`, value.of([]), value.sd?.([]))),
    ...[...duty.settings].flatMap(([name, { value }]) => of(name, value.of([]), value.sd?.([]))),
    ...network.feeds
      .filter((f) => !duty.flows.has(f.name))
      .flatMap((f) => of(`${f.name}.flow`, env[f.flowSlot], f.flow.sd?.(env))),
  ];
}

/** Row `a` with the inputs of a source taken from row `b`. */
export function mixedRow(a: Row, b: Row, { vessel, duty }: Source): Row {
  const taken = (from: Settings, names: readonly string[]): Settings =>
    Object.fromEntries(names.flatMap((name) => (name in from ? [[name, from[name]] as const] : [])));
  return {
    vessel: { ...a.vessel, ...taken(b.vessel, vessel) },
    duty: { ...a.duty, ...taken(b.duty, duty) },
    off: {
      vessel: { ...a.off.vessel, ...taken(b.off.vessel, vessel) },
      duty: { ...a.off.duty, ...taken(b.off.duty, duty) },
    },
  };
}
