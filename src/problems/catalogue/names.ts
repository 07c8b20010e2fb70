import { entry } from "../problem.js";

/** So many names can be listed in a fix. */
const fewNames = 12;

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
    fix: ({ name }) => `choose another name, such as '${name}-1'`,
  }),
  "name-taken": entry<{ name: string; by: string }>({
    severity: "error",
    says: ({ name, by }) => `'${name}' is already ${by}`,
    fix: "give one of the two another name",
  }),
  "circular-names": entry<{ circle: readonly string[] }>({
    severity: "error",
    says: ({ circle }) =>
      circle.length === 2
        ? `the value of '${circle[0]}' is made of '${circle[0]}' itself`
        : `these values need one another in a circle: ${circle.join(" -> ")}`,
    fix: ({ circle }) =>
      circle.length === 2
        ? "give it a value made of numbers and other names"
        : "give one of them a value made of numbers and other names",
  }),
  "unknown-place": entry<{
    name: string;
    nearest: string | undefined;
    wanted: string;
    known?: readonly string[];
    /** The row of which it would be a tank. */
    row?: { readonly name: string; readonly tanks: number } | undefined;
  }>({
    severity: "error",
    says: ({ name, wanted }) => `there is no ${wanted} '${name}'`,
    fix: ({ nearest, wanted, known, row }) =>
      row
        ? `the tanks of '${row.name}' are '${row.name}.1' to '${row.name}.${row.tanks}'`
        : known?.length === 0 && wanted === "feed" // a closed vessel cannot have one
          ? `take it out: the network has no ${wanted}`
          : orNearest(
              nearest,
              known && known.length > 0 && known.length <= fewNames
                ? `what may stand here: ${known.map((k) => `'${k}'`).join(", ")}`
                : `name a ${wanted} that is declared`,
            ),
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
    says: ({ name, low, high }) =>
      low === high
        ? `both bounds of '${name}' are ${low}`
        : `the bounds of '${name}' run backwards: ${low} is not below ${high}`,
    fix: ({ low, high }) =>
      low === high
        ? "widen `between`; what must not move belongs under `constants`"
        : `write the smaller bound first: \`between: [${high}, ${low}]\``,
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
  "requirement-broken": entry<{ text: string; left: string; right: string }>({
    severity: "error",
    says: ({ text, left, right }) => `the start values break '${text}': left is ${left}, right ${right}`,
    fix: "change the start values so that it holds",
  }),
  "bound-corner": entry<{ corner: readonly string[]; why: string }>({
    severity: "warning",
    says: ({ corner, why }) => `inside its bounds a fit may meet ${corner.join(", ")}: then ${why}`,
    fix: "narrow `between`, or say under `requires` what must hold (a fit passes over such values either way)",
  }),
} as const;
