import { compiler } from "../compile/compile.js";
import { unstirred } from "../compile/unstirred.js";
import { isClosed, type Network } from "../model/network.js";
import type { Reading, Trial } from "../model/trial.js";
import type { Problem } from "../problems/problem.js";
import { problem } from "../problems/report.js";
import { type FlaskMove, followFlask } from "../reaction/flask.js";
import { steadyState } from "../reaction/steady.js";
import type { ForwardModel, Sloped, WantedTimes } from "./forward.js";
import { movedBy, stepAlong } from "./reacting-moves.js";
import { dutyOf, flaskOf, type Point, type Scene, sceneMaker } from "./reacting-scene.js";

/**
 * What trials of reactions give, as a forward model: a flask followed in time with its sensitivity equations, a fed vessel where
 * it has settled, with central differences.
 * @param network with the parameters of the chemistries among its own
 */
export function reactingModel(network: Network): ForwardModel {
  const sceneAt = sceneMaker(network);
  return {
    respond(trial, values, wanted) {
      const scene = sceneAt({ trial, values, day: new Map() });
      const curves = scene && (isClosed(scene.plant) ? flaskCurves(scene, wanted)?.curves : settled(scene, wanted));
      return curves?.every(finite) ? curves : undefined;
    },
    slopes(trial, at, wanted, directions) {
      const here: Point = { trial, values: at.values, day: new Map() };
      const scene = sceneAt(here);
      if (!scene) return undefined;
      const moves = directions.map((direction) => {
        const by = stepAlong(network, trial, at, direction);
        return by === 0
          ? undefined
          : { by, above: movedBy(network, here, at, direction, by), below: movedBy(network, here, at, direction, -by) };
      });
      if (isClosed(scene.plant)) {
        const sides = moves.map((m): FlaskMove | undefined => {
          const [above, below] = [m && sceneAt(m.above), m && sceneAt(m.below)];
          return m && above && below && { by: m.by, above: flaskOf(above), below: flaskOf(below) };
        });
        if (sides.some((side, d) => moves[d] && !side)) return undefined;
        return flaskCurves(scene, wanted, sides);
      }
      const curves = settled(scene, wanted);
      const settledAt = (point: Point): Float64Array[] | undefined => {
        const moved = sceneAt(point);
        return moved && settled(moved, wanted);
      };
      const slopes = moves.map((m) => {
        if (!m) return curves?.map((c) => new Float64Array(c.length));
        const [above, below] = [settledAt(m.above), settledAt(m.below)];
        return above && below && above.map((a, r) => a.map((v, i) => (v - below[r][i]) / (2 * m.by)));
      });
      return curves && { curves, slopes };
    },
    delays: () => [],
  };
}

const finite = (c: Float64Array): boolean => c.every(Number.isFinite);

/** What a reading makes of the concentrations everywhere, node by node. */
function seen({ places, of }: Reading, { plant, reacting }: Scene, c: ArrayLike<number>): number {
  const n = reacting.chemistry.species.length;
  let sum = 0;
  for (const { name, share } of places) sum += share * c[(plant.exit.get(name) ?? 0) * n + (of?.species ?? 0)];
  return sum * (of?.factor ?? 1);
}

function settled(scene: Scene, wanted: WantedTimes): Float64Array[] | undefined {
  const { trial, reacting, plant, constants } = scene;
  const state = steadyState(plant, reacting.chemistry, dutyOf(trial, reacting), constants);
  if (!state.converged) return undefined;
  return trial.readings.map((reading, r) =>
    new Float64Array(wanted[r].time.length).fill(seen(reading, scene, state.concentrations)),
  );
}

/** Curves of a closed vessel and their derivatives; a direction that moves nothing of it is undefined. */
function flaskCurves(
  scene: Scene,
  wanted: WantedTimes,
  moves: readonly (FlaskMove | undefined)[] = [],
): Sloped | undefined {
  const { trial, reacting } = scene;
  const since = (t: number, { line }: Reading): number => Math.max(0, t - reacting.begins - (line.delay?.of([]) ?? 0));
  const times = new Set(trial.readings.flatMap((reading, r) => Array.from(wanted[r].time, (t) => since(t, reading))));
  const all = Float64Array.from(times).sort();
  const known = moves.filter((m) => m !== undefined);
  const course = followFlask(flaskOf(scene), all, known);
  if (!course) return undefined;
  const index = new Map(Array.from(all, (t, k) => [t, k]));
  const read = (states: readonly Float64Array[]): Float64Array[] =>
    trial.readings.map((reading, r) =>
      wanted[r].time.map((t) => seen(reading, scene, states[index.get(since(t, reading)) ?? 0])),
    );
  const still = trial.readings.map((_, r) => new Float64Array(wanted[r].time.length));
  let next = 0;
  return { curves: read(course.states), slopes: moves.map((m) => (m ? read(course.slopes[next++]) : still)) };
}

/** A model that follows tracers by one model and reactions by another. */
export function jointModel(tracer: ForwardModel, reacting: ForwardModel): ForwardModel {
  const of = (trial: Trial): ForwardModel => (trial.reacting ? reacting : tracer);
  return {
    keep(trials) {
      for (const trial of trials) of(trial).keep?.([trial]);
    },
    respond: (trial, values, wanted) => of(trial).respond(trial, values, wanted),
    slopes: (trial, at, wanted, directions) => of(trial).slopes?.(trial, at, wanted, directions),
    delays: (trial, values) => of(trial).delays(trial, values),
  };
}

/** Why trials of reactions cannot be followed in their vessels; empty where they can. */
export function cannotFollow(network: Network, trials: readonly Trial[]): Problem[] {
  return trials.flatMap(({ reacting }) => {
    const vessel = reacting && (reacting.vessel ?? network);
    if (!vessel || !isClosed(vessel)) return [];
    const { plant, problems } = compiler(vessel).compile({});
    const name = plant && unstirred(plant);
    return name === undefined ? problems : [problem("flask-body", vessel.at, { name })];
  });
}
