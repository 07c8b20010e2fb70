import { compiler } from "../compile/compile.js";
import { Part, type Plant } from "../compile/plant.js";
import type { Duty } from "../model/duty.js";
import { RefusedError } from "../problems/refused.js";
import { problem } from "../problems/report.js";
import type { DutySettings } from "../reaction/conditions.js";
import { type FlowCourse, steadyCourse } from "../simulate/flow-course.js";
import { courseThrough, type FlowRow } from "../simulate/logged-flows.js";
import { lineAt, lineOf } from "./course-line.js";

/**
 * The flows of a plant in a duty over time: the network is balanced for what its feeds bring then. Volumes stay as they are.
 * @param plant compiled for what the feeds bring before
 * @throws RefusedError where a flow makes the network impossible, or where more than flows would change
 */
export function flowsOf(plant: Plant, duty: Duty, settings: DutySettings): FlowCourse {
  const courses = [...(duty.flowCourses ?? [])].filter(([feed]) => plant.feeds.some((f) => f.name === feed));
  if (courses.length === 0) return steadyCourse(plant);
  const lines = courses.map(([feed, course]) => {
    const before = plant.feeds.find((f) => f.name === feed)?.flow ?? 0;
    return lineOf(course, before, settings[`${feed}.flow.to`]);
  });
  const times = [...new Set(lines.flatMap(({ times: own }) => [...own]))].sort((a, b) => a - b);
  const rows = times.flatMap((t): FlowRow[] => {
    const [before, after] = [-1, 1].map((side) => ({ t, flows: lines.map((line) => lineAt(line, t, side)) }));
    return before.flows.every((q, i) => q === after.flows[i]) ? [after] : [before, after];
  });
  const feeds = courses.map(([feed]) => feed);
  return courseThrough(plant, feeds, rows, (made) => requireOnlyFlows(plant, made));
}

/** The plant as it is once flows have changed for good; as it is before where they come back, or end. */
export function plantAfter(plant: Plant, duty: Duty): Plant {
  const settings: Record<string, number> = { ...plant.settings };
  let other = false;
  for (const [feed, course] of duty.flowCourses ?? []) {
    const last =
      course.is === "logged"
        ? course.values[course.values.length - 1]
        : course.lasting === undefined
          ? course.to.of([])
          : undefined;
    const before = plant.feeds.find((f) => f.name === feed)?.flow ?? 0;
    if (last === undefined || !(last > slowest * before)) continue;
    settings[`${feed}.flow`] = last;
    other = true;
  }
  return (other && compiler(plant.network).compile(settings).plant) || plant;
}

/** A feed that goes on at less than this part of what it brought counts as ended. */
const slowest = 0.01;

/** What a body holds, and how it is passed, must not hang on the flow. @throws RefusedError */
function requireOnlyFlows(plant: Plant, made: Plant): void {
  const { size, volume, inflow, part } = plant.columns;
  const refuse = (node: number, what: string): never => {
    const name = plant.columns.nameOf(node);
    const { at } = plant.network.compartments.find((body) => body.name === name) ?? plant.network;
    throw new RefusedError([problem("not-yet", at, { what: `a flow that changes in time where ${what} '${name}',` })]);
  };
  for (let i = 0; i < size; i++) {
    if (Math.abs(made.columns.volume[i] - volume[i]) > 1e-9 * volume[i])
      refuse(i, "a volume follows the flow, that of");
    if (made.columns.inflow[i] > 0 !== inflow[i] > 0) refuse(i, "flow starts or ends, through");
    if (part[i] !== Part.Block) continue;
    const [was, is] = [plant.columns.blockAt(i), made.columns.blockAt(i)];
    const same =
      was?.mixing.is === is?.mixing.is &&
      (was?.mixing.is !== "dispersed" || is?.mixing.is !== "dispersed" || was.mixing.peclet === is.mixing.peclet) &&
      was?.pockets?.exchange === is?.pockets?.exchange;
    if (!same) refuse(i, "how a body is mixed follows the flow, that of");
  }
}
