import type { Duty } from "../model/duty.js";
import type { Network } from "../model/network.js";
import type { Asked, InputRange, Study } from "../model/study.js";
import type { Report } from "../problems/report.js";
import { nearest } from "../text/nearest.js";
import { type Dimension, dimensions } from "../units/dimension.js";
import { sameKind } from "./same-kind.js";

/** What a duty in a network may be swept over, by name: its dimension, and whether it has bounds of its own. */
export function inputNames(
  network: Network,
  duty: Duty,
): Map<string, { readonly dimension: Dimension; readonly bounded: boolean }> {
  const names = new Map<string, { dimension: Dimension; bounded: boolean }>();
  const add = (name: string, dimension: Dimension, bounded = false): void => {
    if (!names.has(name)) names.set(name, { dimension, bounded });
  };
  for (const { name, value } of duty.chemistry?.constants ?? []) add(name, value.dimension);
  for (const [place, { constants }] of duty.local ?? []) {
    for (const [name, { value }] of constants) add(`${place}.${name}`, value.dimension);
  }
  for (const [feed, { species }] of duty.feeds) {
    for (const [name, { value }] of species) add(`${feed}.${name}`, value.dimension);
  }
  for (const [feed, { courses }] of duty.feeds) {
    for (const [name, course] of courses ?? []) {
      if (course.is === "upset") add(`${feed}.${name}.to`, course.to.dimension);
    }
  }
  for (const [feed, { temperature }] of duty.feeds) if (temperature) add(`${feed}.temperature`, temperature.dimension);
  for (const [place, { temperature, conductance }] of duty.heat?.jackets ?? []) {
    add(`${place}.jacket`, temperature.dimension);
    add(`${place}.conductance`, conductance.dimension);
  }
  for (const { feed, size } of duty.heat?.exchangers ?? []) add(`${feed}.${size.is}`, size.value.dimension);
  const capacity = duty.heat && duty.chemistry?.heatCapacity;
  if (capacity) add("heat-capacity", capacity.dimension);
  if (duty.temperature) add("temperature", duty.temperature.dimension);
  for (const { name, role, value, between } of network.names) {
    if (role !== "inflow") add(name, value.dimension, between !== undefined);
  }
  return names;
}

/** Bodies of several tanks in a row, how many of which a sweep may move in whole steps. */
const countNames = ({
  compartments,
}: Network): [string, { readonly dimension: Dimension; readonly bounded: boolean }][] =>
  compartments.flatMap(({ name, counts }) =>
    counts.repeat === undefined ? [] : [[`${name}.repeat`, { dimension: dimensions.ratio, bounded: false }]],
  );

/**
 * Are the inputs that sweeps and aims of a study name in at least one rival, of the right kind, and between something? What is
 * asked of a changed vessel is left to the run: the change may bring the name.
 */
export function checkAsked({ rivals, sweeps, aims }: Pick<Study, "rivals" | "sweeps" | "aims">, report: Report): void {
  const look = ({ duty, change }: Asked, { name, at, between }: InputRange, steps: boolean): void => {
    const all = rivals.map((r) => new Map([...inputNames(r.network, duty), ...(steps ? countNames(r.network) : [])]));
    const found = all.find((names) => names.has(name))?.get(name);
    if (all.length === 0 || (!found && change)) return;
    if (!found) {
      const known = [...new Set(all.flatMap((names) => [...names.keys()]))];
      report("unknown-place", at, { name, nearest: nearest(name, known), wanted: "input", known });
      return;
    }
    for (const end of between ?? []) sameKind(found.dimension, end, report);
    if (!between && !all.some((names) => names.get(name)?.bounded)) report("range-missing", at, { name });
  };
  for (const sweep of sweeps) for (const range of sweep.over) look(sweep, range, true);
  for (const aim of aims) look(aim, aim.by, false);
}
