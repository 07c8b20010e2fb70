import type { Realization } from "../compartments/realization.js";
import type { Plant } from "../compile/plant.js";
import { bodyAt } from "../reaction/bodies.js";
import type { Conditions } from "../reaction/conditions.js";
import type { Pass } from "../reaction/dispersion.js";
import type { Reactions } from "../reaction/kinetics.js";
import { type FlowCourse, steadyCourse } from "../simulate/flow-course.js";
import { integrable, type Sort } from "../simulate/integrable.js";
import { Blends } from "./blends.js";
import { type Follow, followOf } from "./follow.js";
import { type Warming, warmedPlant } from "./warming.js";

/** A plant with what happens in it, cut into stages: cells and dispersed bodies between tubes are integrated together. */
export interface Scene {
  readonly plant: Plant;
  /** Components of a mixture. */
  readonly width: number;
  readonly sort: readonly Sort[];
  /** How each body that is neither cell nor joint is followed; undefined for those. */
  readonly follow: readonly (Follow | undefined)[];
  /** Stage in which what leaves a node is known. */
  readonly stage: Int32Array;
  readonly stages: number;
  /** Is the node in a circle of nodes? */
  readonly looped: Uint8Array;
  readonly net: ReturnType<typeof integrable>;
  readonly blends: Blends;
  readonly course: FlowCourse;
  readonly warmings: readonly Warming[];
  /** What happens at a node. */
  at(node: number): Reactions;
  /** What a node makes of a mixture that goes through it. */
  pass(node: number): Pass | undefined;
}

/** @throws RefusedError where a body cannot be followed in time */
export function sceneOf(bare: Plant, { size: width, reactionsAt, heat }: Conditions, flows: FlowCourse): Scene {
  const { plant, warmings } = warmedPlant(bare, heat?.exchangers ?? []);
  const course = warmings.length > 0 ? steadyCourse(plant) : flows;
  const { size, inflow, part } = plant.columns;
  const follow = Array.from({ length: size }, (_, i) =>
    inflow[i] > 0 || part[i] === 0 ? followOf(plant, i) : undefined,
  );
  const realized = follow.map((f): Realization | undefined => (f?.is === "states" ? f.realization : f?.spread));
  const net = integrable(plant, realized);
  const { stage, stages } = staged(net, follow);
  return {
    plant,
    width,
    sort: net.sort,
    follow,
    stage,
    stages,
    looped: net.looped,
    net: { ...net, stage, stages },
    blends: new Blends(plant, net.sort, course, warmings),
    warmings,
    course,
    at: reactionsAt,
    pass: (node) => bodyAt(plant, node, reactionsAt(node)),
  };
}

/**
 * Bodies that are read off what entered them wait for what comes before, outside circles; what follows them waits for them. So
 * does what follows a circle that holds such a body: the short steps there are its own.
 */
function staged({ plant, into, sort, looped }: Scene["net"], follow: Scene["follow"]): Pick<Scene, "stage" | "stages"> {
  const stage = new Int32Array(sort.length);
  const after = new Int32Array(sort.length);
  const readOff = (i: number): boolean => follow[i]?.is === "parcels" && sort[i] !== "joint";
  for (const group of plant.groups) {
    const inside = new Set(group);
    let first = 0;
    for (const i of group) {
      for (let e = into.start[i]; e < into.start[i + 1]; e++) {
        const before = plant.from[into.edges[e]];
        if (!inside.has(before)) first = Math.max(first, after[before]);
      }
    }
    const slow = group.some((i) => looped[i] && readOff(i));
    for (const i of group) {
      stage[i] = first + (!looped[i] && readOff(i) ? 1 : 0);
      after[i] = stage[i] + (slow ? 1 : 0);
    }
  }
  return { stage, stages: stage.reduce((m, s) => Math.max(m, s), 0) + 1 };
}
