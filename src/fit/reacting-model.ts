import { uncarried } from "../compile/carried.js";
import { compiler } from "../compile/compile.js";
import type { Plant } from "../compile/plant.js";
import { unstirred } from "../compile/unstirred.js";
import { isClosed, type Network } from "../model/network.js";
import type { Reacting, Reading, Trial } from "../model/trial.js";
import type { Problem } from "../problems/problem.js";
import { type FlaskMove, followFlask } from "../reaction/flask.js";
import { steadyState } from "../reaction/steady.js";
import { transient } from "../transient/transient.js";
import type { ForwardModel, Sloped, WantedTimes } from "./forward.js";
import { movedBy, stepAlong, steps } from "./reacting-moves.js";
import { dutyOf, flaskOf, type Point, type Scene, sceneMaker } from "./reacting-scene.js";

/**
 * What trials of reactions give, as a forward model: a flask of stirred bodies followed with its sensitivity equations; any other
 * vessel where it has settled, or in time, with central differences.
 * @param network with the parameters of the chemistries among its own
 */
export function reactingModel(network: Network): ForwardModel {
  const sceneAt = sceneMaker(network);
  return {
    respond(trial, values, wanted) {
      const scene = sceneAt({ trial, values, day: new Map() });
      const curves = scene && (isFlask(scene.plant) ? flaskCurves(scene, wanted)?.curves : vesselCurves(scene, wanted));
      return curves?.every(finite) ? curves : undefined;
    },
    slopes(trial, at, wanted, directions) {
      const here: Point = { trial, values: at.values, day: new Map() };
      const scene = sceneAt(here);
      if (!scene) return undefined;
      const overTime = trial.readings.some((r) => !r.of?.steady);
      const widths = isFlask(scene.plant) ? steps.flask : overTime ? steps.inTime : steps.settled;
      const moves = directions.map((direction) => {
        const by = stepAlong(network, trial, at, direction, widths);
        return by === 0
          ? undefined
          : { by, above: movedBy(network, here, at, direction, by), below: movedBy(network, here, at, direction, -by) };
      });
      if (isFlask(scene.plant)) {
        const sides = moves.map((m): FlaskMove | undefined => {
          const [above, below] = [m && sceneAt(m.above), m && sceneAt(m.below)];
          return m && above && below && { by: m.by, above: flaskOf(above), below: flaskOf(below) };
        });
        if (sides.some((side, d) => moves[d] && !side)) return undefined;
        return flaskCurves(scene, wanted, sides);
      }
      const curves = vesselCurves(scene, wanted);
      const curvesAt = (point: Point): Float64Array[] | undefined => {
        const moved = sceneAt(point);
        return moved && vesselCurves(moved, wanted);
      };
      const slopes = moves.map((m) => {
        if (!m) return curves?.map((c) => new Float64Array(c.length));
        const [above, below] = [curvesAt(m.above), curvesAt(m.below)];
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

/** Is it a closed vessel of stirred bodies? */
const isFlask = (plant: Plant): boolean => isClosed(plant) && unstirred(plant) === undefined;

/** Seconds since the vessel began, as a reading at a time sees it. */
const since = (t: number, { line }: Reading, { begins }: Reacting): number =>
  Math.max(0, t - begins - (line.delay?.of([]) ?? 0));

/** All times at which readings over time see the vessel, ascending. */
function momentsOf({ trial, reacting }: Scene, wanted: WantedTimes): Float64Array {
  const timed = trial.readings.flatMap((reading, r) =>
    reading.of?.steady ? [] : Array.from(wanted[r].time, (t) => since(t, reading, reacting)),
  );
  return Float64Array.from(new Set(timed)).sort();
}

/** What any vessel gives: analyses where it has settled, readings as it goes on in time. */
function vesselCurves(scene: Scene, wanted: WantedTimes): Float64Array[] | undefined {
  const { trial } = scene;
  const steady = trial.readings.some((r) => r.of?.steady) ? settled(scene, wanted) : [];
  const timed = trial.readings.some((r) => !r.of?.steady) ? inTime(scene, wanted) : [];
  return steady && timed && trial.readings.map((r, k) => (r.of?.steady ? steady[k] : timed[k]));
}

function inTime(scene: Scene, wanted: WantedTimes): Float64Array[] | undefined {
  const { trial, reacting, plant, constants } = scene;
  const { chemistry } = reacting;
  const at = [...new Set(trial.readings.flatMap((r) => r.places.map((p) => p.name)))];
  const options = { settings: constants, at, balance: false };
  const course = transient(plant, chemistry, dutyOf(trial, reacting), momentsOf(scene, wanted), options);
  if (course.stopped) return undefined;
  const looks = new Map(at.map((name) => [name, course.look(name)]));
  const c = new Float64Array(chemistry.species.length);
  return trial.readings.map((reading, r) =>
    wanted[r].time.map((t) => {
      let sum = 0;
      for (const { name, share } of reading.places) {
        looks.get(name)?.at(since(t, reading, reacting), c);
        sum += share * c[reading.of?.species ?? 0];
      }
      return sum * (reading.of?.factor ?? 1);
    }),
  );
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
  const all = momentsOf(scene, wanted);
  const known = moves.filter((m) => m !== undefined);
  const course = followFlask(flaskOf(scene), all, known);
  if (!course) return undefined;
  const index = new Map(Array.from(all, (t, k) => [t, k]));
  const read = (states: readonly Float64Array[]): Float64Array[] =>
    trial.readings.map((reading, r) =>
      wanted[r].time.map((t) => seen(reading, scene, states[index.get(since(t, reading, reacting)) ?? 0])),
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
  return trials.flatMap(({ reacting, readings }) => {
    const vessel = reacting && (reacting.vessel ?? network);
    if (!vessel) return [];
    const { plant, problems } = compiler(vessel).compile({});
    if (!plant) return problems;
    const steady = readings.some((r) => r.of?.steady) ? uncarried(plant, "reaction") : [];
    return readings.some((r) => !r.of?.steady) && !isFlask(plant)
      ? [...steady, ...uncarried(plant, "transient")]
      : steady;
  });
}
