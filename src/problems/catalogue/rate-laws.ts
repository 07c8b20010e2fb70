import { entry } from "../problem.js";

/** What rate laws give, and what they are fed. */
export const rateLawEntries = {
  "rate-not-finite": entry<{ text: string; value: string; where: string }>({
    severity: "error",
    says: ({ text, value, where }) => `the rate of '${text}' is ${value} at ${where}`,
    fix: "look for a root or power of a difference, a logarithm, a division, or an exponential of a number that grows with a concentration",
  }),
  "rate-at-zero": entry<{ text: string; value: string; gone: readonly string[] }>({
    severity: "warning",
    says: ({ text, value, gone }) =>
      `the rate of '${text}' is ${value} where ${list(gone)} ${gone.length === 1 ? "is" : "are"} gone: no balance can be solved there`,
    fix: ({ gone }) =>
      `write the law so that it stays finite, with a small concentration beside '${gone[0]}' in the divisor, such as (${gone[0]} + little)`,
  }),
  "rate-negative": entry<{ text: string; where: string; allowed?: string }>({
    severity: "warning",
    says: ({ text, where, allowed }) =>
      `'${text}' goes one way, but ${allowed === undefined ? "" : `at ${allowed}, which its bounds allow, `}its rate is negative at ${where}: it would run backwards there and use up what it makes`,
    fix: ({ allowed }) =>
      allowed === undefined
        ? "write `<->` if it goes both ways, or correct the law"
        : "let the bounds end where the rate does, or write `<->` if it goes both ways",
  }),
  "rate-backwards": entry<{ text: string; where: string; set: string }>({
    severity: "error",
    says: ({ text, where, set }) =>
      `with ${set}, '${text}' would run backwards: it is written to go one way, and its rate is negative at ${where}`,
    fix: "correct the value, or write `<->` in the chemistry if it goes both ways",
  }),
  "mass-not-kept": entry<{ text: string; left: string; right: string }>({
    severity: "warning",
    says: ({ text, left, right }) => `by the molar masses '${text}' makes ${right} of ${left}: mass is not kept`,
    fix: "add what else reacts or is made (water, say), or correct a number or a molar mass",
  }),
  "reaction-never-starts": entry<{ text: string; missing: readonly string[] }>({
    severity: "warning",
    says: ({ text, missing }) =>
      `'${text}' never starts: ${missing.length === 0 ? "its rate is zero with all that is there" : `nothing brings or makes ${list(missing)}`}`,
    fix: ({ missing }) =>
      missing.length === 0
        ? "look at the constants of its rate, which this document may set to zero"
        : `give '${missing[0]}' under a feed or under \`contents:\`; a trace is enough where the reaction makes it itself`,
  }),
} as const;

const list = (names: readonly string[]): string =>
  names.length < 2 ? `'${names[0]}'` : `'${names.slice(0, -1).join("', '")}' and '${names.at(-1)}'`;
