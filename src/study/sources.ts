import { evaluateNames } from "../compile/evaluate.js";
import type { Settings } from "../compile/plant.js";
import type { Fit } from "../fit/result.js";
import type { Duty } from "../model/duty.js";
import type { Network } from "../model/network.js";
import { dutyInputs, networkSettings } from "../reaction/conditions.js";
import { type Declared, declaredDraws, declaredNames, fittedNames } from "./draws.js";
import type { Row } from "./operate.js";

/** What is known about where an uncertain input comes from: how to learn more of it follows. */
export type SourceKind = "fit" | "vessel" | "flow" | "kinetics" | "feed" | "temperature";

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
export function rowsFor(network: Network, duty: Duty, settings: readonly Settings[], seed: number): Row[] {
  const inputs = declaredDraws(onlyDuty(duty), settings.length, seed);
  const days = declaredDraws(declaredFlows(network, duty), settings.length, seed);
  const set = networkSettings(duty);
  return settings.map((own, i) => ({ vessel: { ...own, ...set, ...days[i] }, duty: inputs[i] }));
}

/** Everything that makes the figures of a duty unsure, in an order of its own. */
export function sourcesOf(network: Network, fit: Fit | undefined, duty: Duty): Source[] {
  const set = new Set(Object.keys(networkSettings(duty)));
  const fitted = fittedNames(network, fit).filter((name) => !set.has(name));
  const one = (kind: SourceKind, name: string, place: "vessel" | "duty"): Source => ({
    kind,
    name,
    vessel: place === "vessel" ? [name] : [],
    duty: place === "duty" ? [name] : [],
  });
  const constants = new Set(duty.chemistry?.constants.map((c) => c.name) ?? []);
  const kindOf = (name: string): SourceKind =>
    name === "temperature" ? "temperature" : constants.has(name) ? "kinetics" : "feed";
  const sources = [
    ...(fitted.length > 0 ? [{ kind: "fit" as const, name: fitted.join(", "), vessel: fitted, duty: [] }] : []),
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
  return { vessel: { ...a.vessel, ...taken(b.vessel, vessel) }, duty: { ...a.duty, ...taken(b.duty, duty) } };
}
