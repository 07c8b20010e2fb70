import { entry } from "../problem.js";

/** Chemistries and duties. */
export const chemistryEntries = {
  "bad-equation": entry<{ text: string; why: string; fix: string }>({
    severity: "error",
    says: ({ text, why }) => `'${text}' is not a reaction equation: ${why}`,
    fix: ({ fix }) => fix,
  }),
  "zero-stoichiometry": entry<{ species: string }>({
    severity: "error",
    says: ({ species }) => `'${species}' has the stoichiometric number 0`,
    fix: "leave the species out, or give the number that is made (negative where it is used up)",
  }),
  "nothing-happens": entry<{ text: string }>({
    severity: "error",
    says: ({ text }) => `'${text}' makes nothing and uses up nothing`,
    fix: "write what changes: at least one species must differ between the two sides",
  }),
  "mass-action-makes": entry<Record<string, never>>({
    severity: "error",
    says: () => "a mass-action rate takes its orders from an equation, and this reaction has none",
    fix: "write `equation:` in place of `makes:`, or the rate law in full, such as `rate: k1 * A`",
  }),
  "mass-action-constants": entry<{ text: string; wanted: number; got: number }>({
    severity: "error",
    says: ({ text, wanted, got }) =>
      `'${text}' by mass action needs ${wanted === 1 ? "one constant" : "two constants, forward and back"}, and ${got === 0 ? "none is" : got === 1 ? "one is" : `${got} are`} named`,
    fix: ({ wanted }) => (wanted === 1 ? "write `constant: k1`" : "write `constant: [k1, k2]`, forward then back"),
  }),
  "constant-without-mass-action": entry<Record<string, never>>({
    severity: "error",
    says: () => "`constant:` is only for `rate: mass-action`; this reaction has a rate law of its own",
    fix: "take `constant:` out, or write `rate: mass-action`",
  }),
  "arrhenius-half": entry<{ name: string; has: string; lacks: string }>({
    severity: "error",
    says: ({ name, has, lacks }) => `constant '${name}' has \`${has}\` but no \`${lacks}\``,
    fix: "an Arrhenius constant needs all three: `{at: 298.15 K, value: 2 L/mol/min, activation: 45 kJ/mol}`",
  }),
  "rate-dimension": entry<{ text: string; rate: string; got: string; fix: string }>({
    severity: "error",
    says: ({ text, rate, got }) =>
      `the rate of '${text}', ${rate}, comes out as ${got}, and a rate is concentration per time (like 0.1 mol/L/min)`,
    fix: ({ fix }) => fix,
  }),
  "rates-disagree": entry<{ first: string; second: string; firstBasis: string; secondBasis: string }>({
    severity: "error",
    says: ({ first, second, firstBasis, secondBasis }) =>
      `'${first}' is right with ${firstBasis}, '${second}' only with ${secondBasis}: they share species, so both cannot be`,
    fix: "give the constants of both laws units of the same kind: all per mole, or all per mass",
  }),
  "temperature-missing": entry<{ chemistry: string }>({
    severity: "error",
    says: ({ chemistry }) => `the rates of '${chemistry}' depend on the temperature, and this duty gives none`,
    fix: "add `temperature: 25 degC`",
  }),
  "feed-basis": entry<{ species: string; got: string; wanted: string; example: string }>({
    severity: "error",
    says: ({ species, got, wanted }) => `'${species}' is fed as ${got}, but the rate laws need ${wanted}`,
    fix: ({ species, example }) =>
      `write it like ${example}, or give '${species}' a \`molar-mass\` in the chemistry where one is an amount and the other a mass`,
  }),
  "mass-equation": entry<{ text: string }>({
    severity: "warning",
    says: ({ text }) => `'${text}' counts molecules, but its species are fed as masses: one gram would make one gram`,
    fix: "feed amounts (mol/L), or write `makes:` with grams per gram, such as {A: -1, P: 0.8}",
  }),
  "feed-not-given": entry<{ feed: string }>({
    severity: "error",
    says: ({ feed }) => `the duty does not say what feed '${feed}' brings`,
    fix: ({ feed }) =>
      `add it under \`feeds:\`, such as \`${feed}: {A: 1 mol/L}\`, or \`${feed}: {}\` for clean liquid`,
  }),
  "bad-report-line": entry<{ text: string }>({
    severity: "error",
    says: ({ text }) => `'${text}' is not a figure that a duty can report`,
    fix: "write conversion of A, yield of P from A, selectivity of P over S, log-removal of A, A at product or t10 at product",
  }),
} as const;
