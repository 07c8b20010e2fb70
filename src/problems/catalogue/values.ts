import type { FaultData } from "../../expressions/fault.js";
import { entry } from "../problem.js";

/** Problems of values, units and expressions. The first group are the faults of a text, the second those of its place. */
export const valueEntries = {
  "bad-number": entry<FaultData["bad-number"]>({
    severity: "error",
    says: (d) => `\`${d.text}\` ${d.why}`,
    fix: (d) => d.fix,
  }),
  "space-before-unit": entry<FaultData["space-before-unit"]>({
    severity: "error",
    says: (d) => `\`${d.text}\` has no space between the number and what follows`,
    fix: (d) => d.fix,
  }),
  "unknown-unit": entry<FaultData["unknown-unit"]>({
    severity: "error",
    says: (d) =>
      d.part === d.unit ? `\`${d.unit}\` is no known unit` : `\`${d.part}\` in \`${d.unit}\` is no known unit`,
    fix: (d) =>
      d.nearest
        ? `did you mean \`${d.nearest}\`?`
        : "write a unit such as L, m3, min, h, g, mol/L, L/min or %; to multiply by a name, write `*` before it",
  }),
  "bad-unit": entry<FaultData["bad-unit"]>({
    severity: "error",
    says: (d) => `\`${d.unit}\` cannot be read as a unit`,
    fix: "write it like `L/min`, `m3`, `mol/L/s` or `W/(m2 K)`, with no space but in brackets",
  }),
  "offset-unit": entry<FaultData["offset-unit"]>({
    severity: "error",
    says: (d) => `\`${d.part}\` in \`${d.unit}\` is a point on a scale, but a temperature difference is meant here`,
    fix: (d) =>
      `write \`${d.unit.replace(d.part, "K")}\`${/F|℉/.test(d.part) ? " (1 degF of difference is 5/9 K)" : ""}`,
  }),
  "bad-expression": entry<FaultData["bad-expression"]>({ severity: "error", says: (d) => d.why, fix: (d) => d.fix }),
  "unknown-function": entry<FaultData["unknown-function"]>({
    severity: "error",
    says: (d) => `there is no function \`${d.name}\``,
    fix: (d) =>
      d.nearest
        ? `did you mean \`${d.nearest}\`?`
        : "use one of exp, log, log10, sqrt, abs, min, max, tanh, step-up; to multiply, write `*` before the bracket",
  }),
  "spread-unnamed": entry<{ what: string }>({
    severity: "error",
    says: ({ what }) => `the \`±\` of ${what} would be carried into no interval: only what has a name may vary`,
    fix: "give the value a name, such as `constants: {tank-volume: 100 L ± 2 %}`, and write the name here",
  }),
  "spread-not-carried": entry<{ what: string; named: boolean }>({
    severity: "error",
    says: ({ what }) => `the \`±\` of ${what} would be carried into no interval`,
    fix: ({ named }) =>
      named
        ? "write a name there that the network declares with its `±`, such as `constants: {retention: 1.1 ± 0.2}`"
        : "leave the `±` out, run with the value at each end of what is possible, and see what changes",
  }),
  "bad-uncertainty": entry<FaultData["bad-uncertainty"]>({
    severity: "error",
    says: (d) => d.why,
    fix: (d) => d.fix,
  }),
  "unlike-terms": entry<FaultData["unlike-terms"]>({
    severity: "error",
    says: (d) => `${d.left} and ${d.right} cannot be ${d.what}`,
    fix: "make both the same kind of quantity, by their units or by multiplying or dividing",
  }),
  "temperature-scale": entry<FaultData["temperature-scale"]>({
    severity: "error",
    says: (d) => d.why,
    fix: (d) => d.fix,
  }),
  "bad-power": entry<FaultData["bad-power"]>({ severity: "error", says: (d) => d.why, fix: (d) => d.fix }),
  "ratio-wanted": entry<FaultData["ratio-wanted"]>({
    severity: "error",
    says: (d) => `\`${d.what}\` takes a pure number, but this is ${d.got}`,
    fix: "divide it by a value of the same kind first",
  }),

  "missing-unit": entry<{ text: string; wanted: string; fixed: string; zero: boolean; cut?: string | undefined }>({
    severity: "error",
    says: (d) => `\`${d.text}\` has no unit; ${d.wanted} is wanted`,
    fix: (d) =>
      `${d.zero ? "a zero needs its unit too" : "write the unit after the number"}: \`${d.fixed}\`${d.cut ? `; \` #\` begins a comment, so \`${d.cut}\` is not read` : ""}`,
  }),
  "wrong-dimension": entry<{ text: string; got: string; wanted: string; example: string; weighed?: boolean }>({
    severity: "error",
    says: (d) => `\`${d.text}\` is ${d.got}; ${d.wanted} is wanted`,
    fix: (d) =>
      d.example
        ? `write it like \`${d.example}\`${d.weighed ? "; a network that is counted in kg and kg/h says so by `basis: mass`" : ""}`
        : "write a plain number or share, without a unit",
  }),
  "unknown-name": entry<{
    name: string;
    nearest: string | undefined;
    minus: string | undefined;
    unit: boolean;
  }>({
    severity: "error",
    says: (d) => `there is no constant, parameter or other value named \`${d.name}\``,
    fix: (d) =>
      d.minus
        ? `a minus has spaces around it: did you mean \`${d.minus}\`?`
        : d.unit
          ? `\`${d.name}\` is a unit: it stands after a number, and has no space inside, like \`10 L/min\``
          : d.nearest
            ? `did you mean \`${d.nearest}\`?`
            : "declare it under `constants` or `parameters`",
  }),
} as const;
