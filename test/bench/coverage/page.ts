import { type Method, noises, type Vessel } from "./cases.js";

/** What one process counted. */
export interface Outcome {
  readonly vessel: number;
  readonly noise: number;
  /** By `method parameter`. */
  readonly tallies: Readonly<Record<string, { readonly held: number; readonly of: number; readonly width: number }>>;
}

/** Counts of several processes together, by vessel, noise, method and parameter. */
export function together(outcomes: readonly Outcome[]): Outcome[] {
  const all = new Map<
    string,
    { vessel: number; noise: number; tallies: Record<string, { held: number; of: number; width: number }> }
  >();
  for (const { vessel, noise, tallies } of outcomes) {
    const key = `${vessel} ${noise}`;
    const sum = all.get(key) ?? { vessel, noise, tallies: {} };
    all.set(key, sum);
    for (const [name, t] of Object.entries(tallies)) {
      const before = sum.tallies[name] ?? { held: 0, of: 0, width: 0 };
      sum.tallies[name] = { held: before.held + t.held, of: before.of + t.of, width: before.width + t.width };
    }
  }
  return [...all.values()];
}

const methods: readonly Method[] = ["linear", "profile", "bootstrap"];

/** The page of the manual. */
export function pageOf(outcomes: readonly Outcome[], vessels: readonly Vessel[]): string {
  const rows = together(outcomes)
    .sort((a, b) => a.vessel - b.vessel || a.noise - b.noise)
    .flatMap(({ vessel, noise, tallies }) =>
      vessels[vessel].asked.map((name) => {
        const cells = methods.map((method) => {
          const t = tallies[`${method} ${name}`];
          if (!t) return "";
          const share = ((100 * t.held) / t.of).toFixed(1);
          return Number(share) < 92 || Number(share) > 98 ? `**${share}**` : share;
        });
        const sets = Math.max(...methods.map((m) => tallies[`${m} ${name}`]?.of ?? 0));
        return `| ${vessels[vessel].title} | ${name} | ${noises[noise].title} | ${sets} | ${cells.join(" | ")} |`;
      }),
    );
  return `### How often 95 % intervals hold the truth

Tests on vessels of known truth, run again and again with errors of their own: independent ones, and such as hang together from one
reading to the next (AR(1), with the correlation of neighbours). Of 100 sets, in how many the interval holds the truth; of 500 sets a
method that is right stays within 93.1 and 96.9 nineteen times of twenty. Bootstrap: percentiles of ${vessels.map((v) => v.refits).join(" and ")} refits of each set. Made by
\`npm run bench -- coverage\` (seeded; test/bench/coverage). Linear intervals of a tube whose front lies between two samples are no
intervals, as \`fit\` says itself, and are not counted. Bold: outside 92 to 98. A refit whose front lies
between two readings counts with the end of that gap.

| vessel | parameter | errors | sets | linear | profile | bootstrap |
|---|---|---|--:|--:|--:|--:|
${rows.join("\n")}
`;
}
