import type { Network } from "../model/network.js";
import type { Trial } from "../model/trial.js";
import type { Coordinate } from "./coordinates.js";
import type { Direction, ForwardModel, WantedTimes } from "./forward.js";
import type { Facts, Held } from "./held.js";
import type { Block } from "./observations.js";

/** Everything that stays the same through a fit. */
export interface Setup {
  readonly network: Network;
  /** Values of all names as the file has them, SI, one per slot. */
  readonly env: Float64Array;
  readonly trials: readonly Trial[];
  readonly coordinates: readonly Coordinate[];
  /** Facts that a fit treats as unknown, held by their `±`. */
  readonly held: readonly Held[];
  /** Constants with a `±`: not estimated, carried into the intervals. */
  readonly constants: readonly Held[];
  readonly blocks: readonly Block[];
  readonly observations: number;
  readonly model: ForwardModel;
  /** Moves facts besides, at every point. */
  readonly alter?: (facts: Facts) => void;
  /** Evaluations of the forward model so far. */
  readonly cost: { evaluations: number };
}

/** Values of the free parameters at a point of the search, SI by name. */
export function valuesAt(setup: Setup, x: ArrayLike<number>): Record<string, number> {
  const values: Record<string, number> = {};
  for (const [i, c] of setup.coordinates.entries()) values[c.name] = c.toSi(x[i]);
  return values;
}

/**
 * The modelled curve of every block, SI.
 * @param x      coordinates of the free parameters, then deviations of the held facts in standard deviations; a point
 *               without the latter leaves the facts as declared
 * @param alter  moves more facts besides
 * @returns undefined where the values make no vessel
 */
export function curvesAt(
  setup: Setup,
  x: ArrayLike<number>,
  alter?: (facts: Facts) => void,
): Float64Array[] | undefined {
  const facts = factsAt(setup, x);
  alter?.(facts);
  return curvesOf(setup, facts);
}

/** The same for facts that are known already. */
export function curvesOf(setup: Setup, facts: Facts): Float64Array[] | undefined {
  setup.cost.evaluations++;
  const curves: Float64Array[] = [];
  for (const [k, trial] of facts.trials.entries()) {
    const blocks = setup.blocks.filter((b) => b.trial === k);
    if (blocks.length === 0) continue;
    const answer = setup.model.respond(trial, valuesOf(setup, facts, k), wantedTimes(trial, blocks));
    if (!answer) return undefined;
    for (const b of blocks) curves.push(answer[b.reading]);
  }
  return curves;
}

/**
 * Exact derivatives of the curves of every block, by direction: of each block SI per unit of the direction.
 * @param directions  by direction and trial; undefined where it moves nothing in a trial
 * @returns a direction that has no derivative somewhere is left out
 */
export function slopesOf(
  setup: Setup,
  facts: Facts,
  directions: readonly ((trial: number) => Direction | undefined)[],
): (readonly Float64Array[] | undefined)[] {
  const slopes: (Float64Array[] | undefined)[] = directions.map(() => []);
  const shifted = new Set([...setup.held, ...setup.constants].flatMap((h) => h.name ?? []));
  for (const [k, trial] of facts.trials.entries()) {
    const blocks = setup.blocks.filter((b) => b.trial === k);
    if (blocks.length === 0) continue;
    const asked = directions.flatMap((of, p) => {
      const direction = slopes[p] && of(k);
      return direction ? [{ p, direction }] : [];
    });
    const at = { values: valuesOf(setup, facts, k), shifted };
    const answer = setup.model.slopes?.(
      trial,
      at,
      wantedTimes(trial, blocks),
      asked.map((a) => a.direction),
    );
    for (const [p, list] of slopes.entries()) {
      const place = asked.findIndex((a) => a.p === p);
      const found = place < 0 ? undefined : answer?.slopes[place];
      if (place >= 0 && !found) slopes[p] = undefined;
      else for (const b of blocks) list?.push((found?.[b.reading] as Float64Array) ?? new Float64Array(b.time.length));
    }
  }
  return slopes;
}

/** The values that hold in one trial. */
export function valuesOf(setup: Setup, facts: Facts, trial: number): Readonly<Record<string, number>> {
  if (setup.coordinates.every((c) => c.trial === undefined)) return facts.values;
  facts.ofTrials ??= facts.trials.map((_, k) => {
    const own = { ...facts.values };
    for (const c of setup.coordinates) if (c.trial === k) own[c.named.name] = facts.values[c.name];
    return own;
  });
  return facts.ofTrials[trial];
}

/** Parameters and declared facts at a point of the search. */
export function factsAt(setup: Setup, x: ArrayLike<number>): Facts {
  const facts: Facts = { trials: [...setup.trials], values: valuesAt(setup, x) };
  const n = setup.coordinates.length;
  for (let j = 0; n + j < x.length; j++) if (x[n + j] !== 0) setup.held[j].move(facts, x[n + j] * setup.held[j].sd);
  setup.alter?.(facts);
  return facts;
}

const none = { time: new Float64Array(0) };

function wantedTimes(trial: Trial, blocks: readonly Block[]): WantedTimes {
  return trial.readings.map((_, r) => blocks.find((b) => b.reading === r) ?? none);
}
