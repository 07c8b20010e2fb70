import { compile } from "../compile/compile.js";
import { evaluateNames } from "../compile/evaluate.js";
import type { Plant, Settings } from "../compile/plant.js";
import type { Duty } from "../model/duty.js";
import type { Network } from "../model/network.js";
import { type DutySettings, dutyInputs, networkSettings } from "../reaction/conditions.js";
import { figuresOf } from "../reaction/figures.js";
import { predict } from "../reaction/prediction.js";
import { steadyState } from "../reaction/steady.js";
import { declaredDraws } from "./draws.js";
import type { RivalDraws } from "./draws-of.js";
import { driversOf } from "./drivers.js";
import type { Bounds, Prediction, Ranked } from "./result.js";
import { interval95 } from "./spread.js";

/** A duty's figures for a ranked rival at its fitted values, with intervals from the draws and the bounds of mixing. */
export function predictDuty(ranked: Ranked, duty: Duty, draws: RivalDraws, seed: number): Prediction[] {
  const { network } = ranked.rival;
  const plant = plantFor(network, duty, ranked.fit?.values ?? {});
  if (!plant) return [];
  const { state, figures, bounds, premises } = predict(plant, duty);
  const sampled = sampledFigures(network, duty, draws.settings, seed);
  const varied = sampledInputs(network, duty, draws.settings, seed);
  return figures.map((f, k): Prediction => {
    const b = bounds[k];
    const within: Bounds | undefined = b && {
      segregated: b.segregated.value,
      maximumMixedness: b.maximumMixedness.value,
      position: b.position,
      says: premises?.says ?? "",
      apply: premises?.bound ?? "not checked",
    };
    return {
      rival: ranked.rival,
      duty,
      name: f.name,
      value: f.value,
      unit: f.unit,
      interval95: interval95(sampled.map((s) => s?.[k] ?? Number.NaN)),
      bounds: within,
      drivers: driversOf(
        varied,
        sampled.map((s) => s?.[k]),
      ),
      steady: state,
    };
  });
}

/**
 * Every figure of a duty for every draw: `[draw][figure]`, undefined where a draw makes no vessel or does not settle.
 * What the duty itself declares with `±` (feed, flows, constants) varies along, the same way for every network.
 */
export function sampledFigures(
  network: Network,
  duty: Duty,
  draws: readonly Settings[],
  seed: number,
): (number[] | undefined)[] {
  const inputs = declaredDraws(dutyInputs(duty.chemistry, duty), draws.length, seed);
  const days = declaredDraws(declaredFlows(network, duty), draws.length, seed);
  return draws.map((settings, i) => {
    const plant = plantFor(network, duty, settings, days[i]);
    return plant && figuresAt(plant, duty, nonNegative(inputs[i]));
  });
}

/** All that varies from draw to draw, by name: what the fit leaves open, then what duty and network declare with `±`. */
function sampledInputs(network: Network, duty: Duty, draws: readonly Settings[], seed: number): Settings[] {
  const inputs = declaredDraws(dutyInputs(duty.chemistry, duty), draws.length, seed);
  const days = declaredDraws(declaredFlows(network, duty), draws.length, seed);
  return draws.map((settings, i) => ({ ...settings, ...days[i], ...inputs[i] }));
}

/** A network compiled at a duty's flows; `day` holds drawn flows. */
function plantFor(network: Network, duty: Duty, settings: Settings, day: Settings = {}): Plant | undefined {
  return compile(network, { ...settings, ...networkSettings(duty), ...day }).plant;
}

function figuresAt(plant: Plant, duty: Duty, settings: DutySettings): number[] | undefined {
  const state = steadyState(plant, duty.chemistry, duty, settings);
  return state.converged ? figuresOf(plant, duty, state, settings).map((f) => f.value) : undefined;
}

/** Flows and network values that the duty, or else the network, declares with a `±`. */
function declaredFlows(network: Network, duty: Duty) {
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

/** Concentrations and constants cannot fall below zero, however wide their `±`. */
const nonNegative = (settings: Settings): Settings =>
  Object.fromEntries(Object.entries(settings).map(([name, value]) => [name, Math.max(0, value)]));
