import type { Chemistry } from "../model/chemistry.js";
import type { DutyFeed } from "../model/duty.js";
import type { Value } from "../model/value.js";
import type { Report } from "../problems/report.js";
import type { Span } from "../text/source.js";

/** What a duty or a trial brings to a chemistry. */
export interface Brought {
  readonly at: Span;
  /** What is fed and what is inside at the start. */
  readonly mixtures: readonly DutyFeed[];
  /** Constants set otherwise, by name. */
  readonly constants: ReadonlyMap<string, Value>;
  /** K; undefined where it is not one. */
  readonly temperature: number | undefined;
}

/**
 * Warns of reactions that never start: from what is brought, reactions whose rate is not zero make more, until nothing new is there.
 * What has no rate yet then lacks a species that nothing brings or makes.
 */
export function neverStarting(chemistry: Chemistry, brought: Brought, report: Report): void {
  const { species, constants, order, temperatureSlot, reactions } = chemistry;
  const n = species.length;
  const env = new Float64Array(temperatureSlot + 1);
  env[temperatureSlot] = brought.temperature ?? 298.15;
  for (const k of order) {
    const { name, value } = constants[k];
    env[n + k] = brought.constants.get(name)?.of([]) ?? value.of(env);
  }
  const there = new Set(species.flatMap(({ name }, i) => (brought.mixtures.some((m) => brings(m, name)) ? [i] : [])));
  if (there.size === 0) return; // clean liquid: nothing is meant to react
  const runs = (missing: ReadonlySet<number>, r: number): boolean => {
    for (let i = 0; i < n; i++) env[i] = missing.has(i) ? 0 : 1 + 0.1 * i;
    return reactions[r].rate(env) !== 0;
  };
  const waiting = new Set(reactions.keys());
  let found = true;
  while (found) {
    found = false;
    for (const r of waiting) {
      if (!runs(absent(n, there), r)) continue;
      waiting.delete(r);
      found = true;
      for (const m of reactions[r].makes) there.add(m.species);
    }
  }
  for (const r of waiting) {
    const lacking = [...absent(n, there)].filter((i) => !runs(new Set([i]), r)).map((i) => species[i].name);
    report("reaction-never-starts", brought.at, { text: reactions[r].text, missing: lacking });
  }
}

const absent = (n: number, there: ReadonlySet<number>): Set<number> =>
  new Set(Array.from({ length: n }, (_, i) => i).filter((i) => !there.has(i)));

/** More than none, at any time. */
const brings = ({ species, courses }: DutyFeed, name: string): boolean =>
  courses?.has(name) === true || !(species.get(name)?.value.of([]) === 0 || !species.has(name));
