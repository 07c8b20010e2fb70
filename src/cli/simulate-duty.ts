import type { Plant } from "../compile/plant.js";
import type { Duty } from "../model/duty.js";
import { isClosed, type Network } from "../model/network.js";
import { networkSettings } from "../reaction/conditions.js";
import { temperatureUnit } from "../reaction/figures.js";
import { predict } from "../reaction/prediction.js";
import { regulatedFigures } from "../reaction/regulated.js";
import { speciesUnits } from "../reaction/species-units.js";
import { type StatesFound, steadyStates } from "../reaction/states.js";
import type { SteadyState } from "../reaction/steady.js";
import { dutyCautions } from "../report/duty-cautions.js";
import { formatNumber } from "../units/format.js";
import { inUnit } from "../units/unit.js";
import { writeAlong } from "./along.js";
import type { Context } from "./context.js";
import { columnsCsv } from "./csv.js";
import { dutyFor } from "./duty-for.js";
import { regulatedJson } from "./json/regulated.js";
import { statesJson } from "./json/states.js";
import { steadyJson } from "./json/steady.js";
import { type Outcome, UsageError } from "./outcome.js";
import { plantAt } from "./plant.js";
import { progressOn } from "./progress.js";
import { settingsBeside } from "./settings.js";
import type { SimulateOptions } from "./simulate-options.js";
import { cautionsText, regulatedText } from "./text/regulated.js";
import { statesText } from "./text/states.js";
import { steadyText } from "./text/steady.js";
import { blocks } from "./text/table.js";

/** `simulate --duty`: the steady state of one operating point. */
export async function simulateDuty(
  network: Network,
  options: SimulateOptions,
  { inputs, io }: Context,
): Promise<Outcome> {
  if (isClosed(network))
    throw new UsageError("a closed vessel has no steady state to look for: follow it with --transient");
  const { set, duty } = settingsBeside(network, options.set, dutyFor(inputs, options.duty ?? "", network));
  const plant = plantAt(network, { ...networkSettings(duty), ...set });
  const progress = progressOn(io);
  const prediction = predict(plant, duty, {}, ({ together, missing }) =>
    progress.say(
      `simulate: ${together.toLocaleString("en")} nodes solved together, balances within ${formatNumber(missing, 1)}`,
    ),
  );
  progress.say("simulate: looking for other steady states");
  const states = duty.chemistry ? searched(plant, duty) : undefined;
  progress.done();
  const { state: steady } = prediction;
  const { output } = options;
  if (output !== undefined) io.write(output, concentrationsCsv(plant, duty, steady));
  const { along } = options;
  if (along !== undefined) await writeAlong(io, along, plant, duty, steady);
  const { worst } = steady;
  const regulated = duty.regulated && regulatedFigures(plant, duty.regulated);
  return {
    status: steady.converged ? 0 : 3,
    text: blocks(
      steadyText(plant, duty, prediction),
      statesText(plant, duty, states),
      regulatedText(regulated, duty, plant),
      cautionsText(duty),
      output === undefined ? "" : `  concentrations: ${output}`,
      along === undefined ? "" : `  along the bodies: ${along}`,
    ),
    json: {
      ok: steady.converged,
      duty: duty.title,
      ...steadyJson(plant, duty, prediction),
      ...(states ? statesJson(plant, duty, states) : {}),
      ...(regulated ? { regulated: regulatedJson(regulated, network.units) } : {}),
      cautions: dutyCautions(duty).map((c) => c.says),
      ...(output === undefined ? {} : { written: output }),
      ...(along === undefined ? {} : { along }),
    },
    notes: steady.converged
      ? []
      : [
          `backmix: the steady state did not converge${worst ? `, worst for ${worst.species} in ${worst.node}` : ""}; the best found is printed`,
        ],
  };
}

/** Nodes up to which a plant is searched for several steady states. */
const mostSearched = 400;

function searched(plant: Plant, duty: Duty): StatesFound {
  if (plant.columns.size > mostSearched) return { states: [], left: ["the network has too many nodes"] };
  return steadyStates(plant, duty.chemistry, duty);
}

/** What leaves every node, cells of tables and members of chains included. */
function concentrationsCsv({ network, columns }: Plant, duty: Duty, state: SteadyState): string {
  const { species, concentrations, temperatures } = state;
  const units = speciesUnits(network, duty, species);
  const n = species.length;
  const warm = temperatureUnit(duty);
  const header = [
    "leaving",
    ...species.map((s, i) => `${s} [${units[i].name || "1"}]`),
    ...(temperatures ? [`temperature [${warm.name}]`] : []),
  ];
  return columnsCsv(header, columns.size, columns.nameOf, (node, i) =>
    temperatures && i === n ? inUnit(temperatures[node], warm) : inUnit(concentrations[node * n + i], units[i]),
  );
}
