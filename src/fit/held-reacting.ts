import type { DutyFeed } from "../model/duty.js";
import type { Reacting, Trial } from "../model/trial.js";
import type { Env, Value } from "../model/value.js";
import { type Facts, type Held, heldValue } from "./held-value.js";
import { shifted } from "./settings.js";

/** Where a value of a trial of a reaction stands. */
interface Slot {
  readonly says: string;
  get(reacting: Reacting): Value | undefined;
  set(reacting: Reacting, value: Value): Reacting;
}

/** What a trial of a reaction declares with a `±`: its temperature, what was fed, what was inside. */
export function heldOfReacting(trial: Trial, k: number, env: Env): Held[] {
  const { reacting } = trial;
  if (!reacting) return [];
  return slotsOf(reacting).flatMap(({ says, get, set }) => {
    const into = (t: Trial, v: Value): Trial => (t.reacting ? { ...t, reacting: set(t.reacting, v) } : t);
    const changed = (t: Trial, by: number): Trial => {
      const now = t.reacting && get(t.reacting);
      return now ? into(t, shifted(now, by)) : t;
    };
    return heldValue(get(reacting), k, `${says} of '${trial.title}'`, env, { changed }, into);
  });
}

function slotsOf({ feeds, contents }: Reacting): Slot[] {
  const amounts = (key: "feeds" | "contents", of: ReadonlyMap<string, DutyFeed>): Slot[] =>
    [...of].flatMap(([place, { species }]) =>
      [...species.keys()].map(
        (name): Slot => ({
          says: `${name} in ${place}`,
          get: (r) => r[key].get(place)?.species.get(name)?.value,
          set: (r, value) => ({ ...r, [key]: withAmount(r[key], place, name, value) }),
        }),
      ),
    );
  return [
    { says: "temperature", get: (r) => r.temperature, set: (r, temperature) => ({ ...r, temperature }) },
    ...amounts("feeds", feeds),
    ...amounts("contents", contents),
  ];
}

function withAmount(
  of: ReadonlyMap<string, DutyFeed>,
  place: string,
  species: string,
  value: Value,
): ReadonlyMap<string, DutyFeed> {
  const feed = of.get(place);
  const now = feed?.species.get(species);
  if (!feed || !now) return of;
  return new Map(of).set(place, { ...feed, species: new Map(feed.species).set(species, { ...now, value }) });
}

/** Constants of the chemistries with a `±` that no trial sets for its day, each moved in all trials of that chemistry at once. */
export function uncertainKinetics(trials: readonly Trial[]): Held[] {
  const paths = new Set(trials.flatMap(({ reacting }) => reacting?.chemistry.path ?? []));
  return [...paths].flatMap((path) => {
    const isOf = (t: Trial | undefined): boolean => t?.reacting?.chemistry.path === path;
    const chemistry = trials.find(isOf)?.reacting?.chemistry;
    const uncertain = (chemistry?.constants ?? []).filter((c) => !c.free && c.value.sd);
    return uncertain.map(({ name }): Held => {
      const changed = (t: Trial, by: number): Trial => {
        if (!t.reacting || !isOf(t) || t.with.has(name)) return t;
        const before = t.reacting.shifted ?? new Map<string, number>();
        return { ...t, reacting: { ...t.reacting, shifted: new Map(before).set(name, (before.get(name) ?? 0) + by) } };
      };
      const move = (facts: Facts, by: number): void => {
        facts.trials.forEach((t, k) => {
          facts.trials[k] = changed(t, by);
        });
      };
      const direction = { names: new Map<string, number>(), changed };
      return { says: name, sd: 1, move, direction: (k) => (isOf(trials[k]) ? direction : undefined) };
    });
  });
}
