import { entry } from "../problem.js";

const orNearest = (nearest: string | undefined, otherwise: string) =>
  nearest ? `did you mean '${nearest}'?` : otherwise;

/** Names of places and of values. */
export const nameEntries = {
  "bad-name": entry<{ name: string }>({
    severity: "error",
    says: ({ name }) => `'${name}' is not a name`,
    fix: "use letters, digits, hyphens and underscores, beginning with a letter",
  }),
  "reserved-name": entry<{ name: string }>({
    severity: "error",
    says: ({ name }) => `'${name}' is a word of the language and cannot be a name`,
    fix: ({ name }) => `choose another name, such as 'my-${name}'`,
  }),
  "name-taken": entry<{ name: string; by: string }>({
    severity: "error",
    says: ({ name, by }) => `'${name}' is already ${by}`,
    fix: "give one of the two another name",
  }),
  "circular-names": entry<{ circle: readonly string[] }>({
    severity: "error",
    says: ({ circle }) => `these values need one another in a circle: ${circle.join(" -> ")}`,
    fix: "give one of them a value of its own",
  }),
  "unknown-place": entry<{ name: string; nearest: string | undefined; wanted: string }>({
    severity: "error",
    says: ({ name, wanted }) => `there is no ${wanted} '${name}'`,
    fix: ({ nearest, wanted }) => orNearest(nearest, `name a ${wanted} that the file declares`),
  }),
  "unused-name": entry<{ name: string; role: string }>({
    severity: "warning",
    says: ({ name, role }) => `the ${role} '${name}' is used nowhere`,
    fix: "use it or take it out",
  }),
  "start-outside-bounds": entry<{ name: string; value: string; low: string; high: string }>({
    severity: "error",
    says: ({ name, value, low, high }) =>
      `the start value of '${name}', ${value}, lies outside its bounds ${low} to ${high}`,
    fix: ({ low, high }) => `choose a value between ${low} and ${high}, or widen \`between\``,
  }),
  "bounds-reversed": entry<{ name: string; low: string; high: string }>({
    severity: "error",
    says: ({ name, low, high }) => `the bounds of '${name}' run backwards: ${low} is not below ${high}`,
    fix: "write the smaller bound first",
  }),
  "bounds-shape": entry<{ name: string }>({
    severity: "error",
    says: ({ name }) => `\`between\` of '${name}' needs two bounds`,
    fix: "write the smaller and the larger, such as [5 L, 480 L]",
  }),
  "log-bounds": entry<{ name: string }>({
    severity: "error",
    says: ({ name }) => `'${name}' is spaced by logarithm, so both its bounds must be above zero`,
    fix: "raise the lower bound above zero, or leave out `spacing: log`",
  }),
  "bad-requirement": entry<{ text: string }>({
    severity: "error",
    says: ({ text }) => `'${text}' is not a comparison`,
    fix: "write two sides with < or > between them, such as riser + stagnant < total",
  }),
  "requirement-broken": entry<{ text: string }>({
    severity: "error",
    says: ({ text }) => `the start values break the requirement '${text}'`,
    fix: "change the start values so that it holds",
  }),
  "bound-corner": entry<{ name: string; why: string }>({
    severity: "warning",
    says: ({ name, why }) => `a corner of the bounds breaks the vessel: ${why} ('${name}')`,
    fix: "narrow `between`, or say what must hold under `requires`; a fit keeps away from such corners by itself",
  }),
} as const;
