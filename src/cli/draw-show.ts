import { flowSheet } from "../draw/flow-sheet.js";
import type { FlowSheet } from "../draw/sheet.js";
import {
  quantitiesOfFlow,
  quantitiesOfSpecies,
  type Shown,
  shownOfFlow,
  shownOfSpecies,
  shownTemperature,
  withTones,
} from "../draw/shown.js";
import type { Network } from "../model/network.js";
import { networkSettings } from "../reaction/conditions.js";
import { temperatureUnit } from "../reaction/figures.js";
import { speciesUnits } from "../reaction/species-units.js";
import { steadyState } from "../reaction/steady.js";
import { nearest } from "../text/nearest.js";
import { dutyFor } from "./duty-for.js";
import type { Inputs } from "./inputs.js";
import { UsageError } from "./outcome.js";
import { plantAt } from "./plant.js";
import { settingsFrom } from "./settings.js";

export interface ShowOptions {
  readonly show?: string;
  readonly duty?: string;
  readonly set?: readonly string[];
}

/** What was drawn, and whether the numbers in it can be trusted. */
export interface ShownSheet {
  readonly sheet: FlowSheet;
  readonly converged: boolean;
}

/**
 * The flow diagram with the quantity of `--show` as tone, where one is asked for.
 * @throws UsageError where there is no such quantity, or it asks for a duty
 */
export function sheetWith(network: Network, { show, duty: file, set }: ShowOptions, inputs: Inputs): ShownSheet {
  const settings = settingsFrom(network, set);
  if (file === undefined) {
    const plant = plantAt(network, settings);
    return { sheet: toned(flowSheet(plant), show, (name) => shownOfFlow(plant, name), undefined), converged: true };
  }
  const duty = dutyFor(inputs, file, network);
  const plant = plantAt(network, { ...networkSettings(duty), ...settings });
  const state = steadyState(plant, duty.chemistry, duty);
  const units = speciesUnits(network, duty, state.species);
  const ofSpecies = {
    names: state.species,
    show: (what: (typeof quantitiesOfSpecies)[number], k: number) => shownOfSpecies(plant, state, what, k, units[k]),
    temperature: state.temperatures && shownTemperature(plant, state.temperatures, temperatureUnit(duty)),
  };
  const sheet = toned(flowSheet(plant), show, (name) => shownOfFlow(plant, name), ofSpecies);
  return { sheet, converged: state.converged };
}

interface OfSpecies {
  readonly names: readonly string[];
  readonly show: (what: (typeof quantitiesOfSpecies)[number], species: number) => Shown;
  /** Where heat is balanced. */
  readonly temperature: Shown | undefined;
}

function toned(
  sheet: FlowSheet,
  show: string | undefined,
  ofFlow: (name: (typeof quantitiesOfFlow)[number]) => Shown,
  ofSpecies: OfSpecies | undefined,
): FlowSheet {
  if (show === undefined) return sheet;
  const wanted = show.trim().replace(/\s+/g, " ");
  const flow = quantitiesOfFlow.find((q) => q === wanted);
  if (flow) return withTones(sheet, ofFlow(flow));
  if (wanted === "temperature") {
    if (ofSpecies?.temperature) return withTones(sheet, ofSpecies.temperature);
    throw new UsageError("--show temperature needs a duty that balances heat: name one with --duty FILE");
  }
  const what = quantitiesOfSpecies.find((q) => wanted.startsWith(`${q} `));
  if (what && !ofSpecies) throw new UsageError(`--show '${wanted}' needs a reaction: name one with --duty FILE`);
  const species = what && ofSpecies ? ofSpecies.names.indexOf(wanted.slice(what.length + 1)) : -1;
  if (what && ofSpecies && species >= 0) return withTones(sheet, ofSpecies.show(what, species));
  const names = [
    ...quantitiesOfFlow,
    ...(ofSpecies?.temperature ? ["temperature"] : []),
    ...(ofSpecies?.names ?? []).flatMap((s) => quantitiesOfSpecies.map((q) => `${q} ${s}`)),
  ];
  const near = nearest(wanted, names);
  throw new UsageError(
    `--show: there is no '${wanted}' to show; ${near ? `did you mean '${near}'?` : `there are ${names.join(", ")}`}`,
  );
}
