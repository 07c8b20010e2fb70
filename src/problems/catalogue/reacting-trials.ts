import { entry } from "../problem.js";

/** Trials of a reaction: a flask followed in time, or analyses of a plant that had settled. */
export const reactingTrialEntries = {
  "needs-chemistry": entry<{ key: string }>({
    severity: "error",
    says: ({ key }) => `'${key}' speaks of species, and this trial names no chemistry`,
    fix: "add `chemistry: FILE` where the trial is of a reaction; a trial of a tracer has `injection:` or a level for each place under `contents:`",
  }),
  "chemistry-and-tracer": entry<{ key: string }>({
    severity: "error",
    says: ({ key }) => `this trial names a chemistry, so it is of a reaction, and \`${key}:\` is of a tracer`,
    fix: "make two trials of it: one with `chemistry:`, `feeds:` or `contents:`, the other with `injection:`",
  }),
  "species-missing": entry<{ at: string; example: string }>({
    severity: "error",
    says: ({ at }) => `the reading at '${at}' does not say which species it is of`,
    fix: ({ example }) => `add \`of: ${example}\``,
  }),
  "reading-basis": entry<{ species: string; unit: string; wanted: string }>({
    severity: "error",
    says: ({ species, unit, wanted }) => `'${species}' is read in ${unit}, but the rate laws count it as ${wanted}`,
    fix: ({ species }) =>
      `give '${species}' a \`molar-mass\` in the chemistry where one is an amount and the other a mass, or the reading a \`calibration\``,
  }),
  "analysis-spread": entry<{ text: string }>({
    severity: "error",
    says: ({ text }) => `${text} has no \`±\`: nobody can tell how much a single analysis counts`,
    fix: "add the standard deviation of the analysis, such as `0.12 mol/L ± 0.01 mol/L` or `0.12 mol/L ± 5 %`",
  }),
  "flask-without-contents": entry<Record<string, never>>({
    severity: "error",
    says: () => "nothing enters a closed vessel, and the trial does not say what it held at the start",
    fix: "add `contents:`, species by place, such as `contents: {flask: {A: 1 mol/L}}`",
  }),
  "flask-is-fed": entry<{ name: string }>({
    severity: "error",
    says: ({ name }) => `'${name}' cannot be fed: the vessel of this trial is closed`,
    fix: "say under `contents:` what the vessel held at the start",
  }),
  "steady-in-flask": entry<Record<string, never>>({
    severity: "error",
    says: () => "a closed vessel goes on reacting, so no analysis of it is one of a steady state",
    fix: "put the analyses into a table with their times, and name it under `readings:`",
  }),
} as const;
