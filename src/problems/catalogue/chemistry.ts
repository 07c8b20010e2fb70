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
    fix: "an Arrhenius constant needs all three: `{at: 298.15 K, value: 2 L/mol/min, activation: 45 kJ/mol}`; an equilibrium constant has `heat` in place of `activation`",
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
    fix: "add `temperature: 25 degC`, or `heat: adiabatic` with a temperature for every feed",
  }),
  "temperature-and-heat": entry<Record<string, never>>({
    severity: "error",
    says: () => "a duty has either one `temperature` everywhere or `heat` balances, and this one has both",
    fix: "take out `temperature:` to have temperatures worked out, or `heat:` to hold one",
  }),
  "heat-capacity-missing": entry<{ chemistry: string | undefined }>({
    severity: "error",
    says: ({ chemistry }) =>
      chemistry === undefined
        ? "heat balances need the heat capacity of the liquid, which a chemistry gives, and this duty names none"
        : `heat balances need the heat capacity of the liquid, and '${chemistry}' does not give it`,
    fix: ({ chemistry }) =>
      chemistry === undefined
        ? "name a `chemistry:` with a `medium:`, or give one `temperature:`"
        : "add `medium: {heat-capacity: 4.1 kJ/L/K}` to the chemistry",
  }),
  "feed-temperature-missing": entry<{ feed: string }>({
    severity: "error",
    says: ({ feed }) => `heat balances need the temperature of every feed, and '${feed}' has none`,
    fix: ({ feed }) => `add it, such as \`${feed}: {temperature: 25 degC, …}\``,
  }),
  "heat-not-given": entry<{ text: string }>({
    severity: "warning",
    says: ({ text }) => `'${text}' has no \`heat\`: in this duty's heat balances it counts as none`,
    fix: "add `heat:` to the reaction in the chemistry, negative where it is set free, or `heat: 0 kJ/mol` where it has none",
  }),
  "heat-basis": entry<{ text: string; got: string; wanted: string }>({
    severity: "error",
    says: ({ text, got, wanted }) => `the heat of '${text}' is ${got}, but its rate law needs ${wanted}`,
    fix: "give the heat per mole where the laws count moles, per mass where they count grams",
  }),
  "heat-follows-temperature": entry<{ what: string }>({
    severity: "error",
    says: ({ what }) => `${what} depends on the temperature, which heat balances do not honour`,
    fix: "write a value that does not depend on `T`: the one in the middle of the range",
  }),
  "heat-capacity-basis": entry<{ perMass: boolean }>({
    severity: "error",
    says: ({ perMass }) =>
      perMass
        ? "the heat capacity is per mass, and there is no `density`"
        : "the heat capacity is per volume already, so a `density` beside it has nothing to do",
    fix: ({ perMass }) =>
      perMass
        ? "add `density: 0.98 kg/L`, or write the heat capacity per volume, such as 4.1 kJ/L/K"
        : "take `density` out",
  }),
  "constant-held": entry<{ name: string }>({
    severity: "error",
    says: ({ name }) =>
      `'${name}' follows the temperature, and heat balances need to know how: one value would hold it fixed wherever it is hot or cold`,
    fix: ({ name }) =>
      `write it like \`${name}: {at: 298.15 K, value: …, activation: …}\` in the chemistry, or in one that is \`based-on\` it`,
  }),
  "nothing-flows-there": entry<{ name: string; key: string; why: string }>({
    severity: "error",
    says: ({ name, key, why }) => `\`${key}\` names '${name}', which ${why}`,
    fix: "name a compartment that liquid flows through",
  }),
  "exchanger-twice": entry<{ side: "feed" | "outlet"; name: string }>({
    severity: "error",
    says: ({ side, name }) => `${side} '${name}' passes two exchangers of \`heat-exchange\``,
    fix: "name every feed and every outlet once: two exchangers in a row are one with the sum of their conductances",
  }),
  "effectiveness-range": entry<Record<string, never>>({
    severity: "error",
    says: () => "an exchanger cannot pass more heat than brings the smaller flow to the other's temperature",
    fix: "give an effectiveness of at most 100 %, such as 70 %",
  }),
  "feed-temperature-unused": entry<{ feed: string }>({
    severity: "warning",
    says: ({ feed }) =>
      `the temperature given for '${feed}' changes nothing: this duty holds one temperature everywhere`,
    fix: "write `heat: adiabatic` or jackets in place of `temperature`, or take it out",
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
    fix: "write conversion of A, yield of P from A, selectivity of P over S, log-removal of A, A at product, temperature at product, t10 at product or time A at product above 0.2 mol/L",
  }),
  "upset-units": entry<{ from: string; to: string }>({
    severity: "error",
    says: ({ from, to }) => `an upset from ${from} to ${to}: both ends must be counted alike`,
    fix: "give `from` and `to` units of one kind, such as mol/L",
  }),
  "log-negative": entry<{ what: string; value: string; row: number; file: string }>({
    severity: "error",
    says: ({ what, value, row, file }) =>
      `${what} is logged as ${value} in row ${row} of ${file}, and cannot be below zero`,
    fix: "correct the row, or leave its value empty: what is missing is bridged by a straight line",
  }),
  "limit-unit": entry<{ species: string; got: string; wanted: string; example: string }>({
    severity: "error",
    says: ({ species, got, wanted }) => `the limit is ${got}, but '${species}' is counted as ${wanted}`,
    fix: ({ example }) => `write it like ${example}`,
  }),
  "contents-temperature-missing": entry<{ place: string }>({
    severity: "error",
    says: ({ place }) =>
      `heat is balanced and nothing is fed, but the duty does not say how warm '${place}' is at the start`,
    fix: ({ place }) => `add its temperature, such as \`${place}: {temperature: 25 degC}\``,
  }),
  "baffling-factor": entry<Record<never, never>>({
    severity: "error",
    says: () => "a baffling factor is t10 over volume over flow, at most 1",
    fix: "write a number above 0 and up to 1, or leave it out: t10 is then that of the network",
  }),
} as const;
