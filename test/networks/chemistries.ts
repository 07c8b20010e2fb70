import { readdirSync, readFileSync } from "node:fs";
import type { Chemistry } from "../../src/model/chemistry.js";
import { parseChemistry } from "../../src/parse/chemistry.js";
import { printProblems } from "../../src/problems/print.js";
import { constantsOf } from "../../src/reaction/constants.js";
import { followFlask } from "../../src/reaction/flask.js";
import { steadyState } from "../../src/reaction/steady.js";
import { dutyOf, plantOf } from "../reaction/make.js";

const folder = "shared/chemistry";

export const chemistryNames = readdirSync(folder)
  .filter((file) => file.endsWith(".yaml"))
  .map((file) => file.slice(0, -".yaml".length));

export const textOf = (name: string): string => readFileSync(`${folder}/${name}.yaml`, "utf8");

export function load(name: string): Chemistry {
  const { document, problems } = parseChemistry(textOf(name), { path: `${folder}/${name}.yaml` });
  if (!document || problems.length > 0) throw new Error(printProblems(problems));
  return document;
}

/** Concentrations by species, SI. */
export type Mixture = Record<string, number>;

const asMixture = (chemistry: Chemistry, c: ArrayLike<number>): Mixture =>
  Object.fromEntries(chemistry.species.map(({ name }, i) => [name, c[i]]));

const body = (kind: "cells" | "tubes", volume: number) =>
  plantOf({
    [kind]: { body: volume },
    links: [
      ["feed", "body", 1],
      ["body", "out", 1],
    ],
  });

function through(kind: "cells" | "tubes", name: string, fed: Mixture, time: number, settings: Mixture): Mixture {
  const chemistry = load(name);
  const state = steadyState(body(kind, time), chemistry, dutyOf(chemistry, { feed: fed }), {
    temperature: 298.15,
    ...settings,
  });
  if (!state.converged) throw new Error(`${name} did not converge`);
  return asMixture(chemistry, state.left);
}

/** What leaves a tube after a space time (s): what a batch of that mixture becomes. */
export const tube = (name: string, fed: Mixture, time: number, settings: Mixture = {}): Mixture =>
  through("tubes", name, fed, time, settings);

/** What leaves a stirred tank of that space time (s). */
export const tank = (name: string, fed: Mixture, time: number, settings: Mixture = {}): Mixture =>
  through("cells", name, fed, time, settings);

/** A flask of that mixture after a time (s). */
export function flask(name: string, held: Mixture, time: number, settings: Mixture = {}): Mixture {
  const chemistry = load(name);
  const plant = plantOf({ cells: { flask: 1 }, links: [] });
  const constants = constantsOf(chemistry, dutyOf(chemistry, {}), { temperature: 298.15, ...settings });
  const start = Float64Array.from(chemistry.species, (s) => held[s.name] ?? 0);
  const course = followFlask({ plant, chemistry, constants, start }, Float64Array.of(time));
  if (!course) throw new Error(`${name} gave up`);
  return asMixture(chemistry, course.states[0]);
}
