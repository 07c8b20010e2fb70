import type { Plant } from "../../compile/plant.js";
import type { Duty } from "../../model/duty.js";
import { temperatureUnit } from "../../reaction/figures.js";
import { amountUnit, speciesUnits } from "../../reaction/species-units.js";
import { atEnd } from "../../transient/at-end.js";
import type { TransientFigure } from "../../transient/figures.js";
import { passageOf } from "../../transient/passage.js";
import type { Course, Transient } from "../../transient/transient.js";
import { dimensions } from "../../units/dimension.js";
import type { Unit } from "../../units/unit.js";
import type { Clock } from "../times.js";
import { finite, quantity, type SeriesJson, series } from "./quantity.js";
import { reportedJson } from "./steady.js";

/** A duty in time: what leaves every place, its figures, and how each outlet gets from first to last. */
export function transientJson(
  plant: Plant,
  duty: Duty,
  run: Transient,
  figures: readonly TransientFigure[],
  clock: Clock,
): Record<string, unknown> {
  const { network } = plant;
  const units = speciesUnits(network, duty, run.species);
  const n = run.species.length;
  const time: SeriesJson = { unit: clock.unit.name, values: clock.shown };
  const held = duty.temperature;
  const warm = ({ temperatures }: Course): ArrayLike<number> | undefined =>
    temperatures ?? (held && run.times.map(() => held.of([])));
  const temperatureOf = (course: Course) => {
    const kelvins = warm(course);
    return kelvins ? { temperature: { time, value: series(kelvins, temperatureUnit(duty)) } } : {};
  };
  const mixture = (course: Course) => ({
    ...Object.fromEntries(
      run.species.map((s, i) => {
        const one = Float64Array.from(run.times, (_, k) => course.values[k * n + i]);
        return [s, { time, value: series(one, units[i]) }];
      }),
    ),
    ...temperatureOf(course),
  });
  const all = (courses: readonly Course[]) => Object.fromEntries(courses.map((c) => [c.name, mixture(c)]));
  const amount = (i: number): Unit => amountUnit(network, duty.concentrations[i]);
  const { balance } = run;
  const until = run.times[run.times.length - 1];
  return {
    start: run.start,
    atEnd: run.stopped ? null : atEnd(run),
    outlets: all(run.outlets),
    compartments: all(run.places),
    report: figures.map((f) => {
      const i = run.species.indexOf(duty.report.find((line) => line.text === f.name)?.of ?? "");
      return {
        name: f.name,
        ...reportedJson(f.beyond ? { ...f, unit: clock.unit } : f),
        ...(f.range
          ? {
              lowest: extremeJson(f.range.lowest, clock.unit),
              highest: extremeJson(f.range.highest, clock.unit),
            }
          : {}),
        ...(f.beyond
          ? {
              spans: f.beyond.spans.map(({ from, to }) => ({
                from: quantity(from, clock.unit),
                to: quantity(to, clock.unit),
              })),
              volume: quantity(f.beyond.volume, network.units.unitFor(dimensions.volume)),
              ...(f.beyond.amount === undefined ? {} : { amount: quantity(f.beyond.amount, amount(i)) }),
              stillAtEnd: f.beyond.stillAtEnd,
            }
          : {}),
      };
    }),
    passages: run.stopped
      ? []
      : run.outlets.flatMap(({ name, flow }) =>
          run.species.flatMap((s, i) => {
            if (!(flow > 0)) return [];
            const { first, last, lowest, highest, t1, t99 } = passageOf(run.look(name), n, i, until);
            const extreme = (e: typeof lowest) => ({
              ...quantity(e.value, units[i]),
              time: quantity(e.at, clock.unit),
            });
            return [
              {
                at: name,
                species: s,
                first: quantity(first, units[i]),
                last: quantity(last, units[i]),
                lowest: extreme(lowest),
                highest: extreme(highest),
                t1: quantity(t1, clock.unit),
                t99: quantity(t99, clock.unit),
              },
            ];
          }),
        ),
    balance: balance
      ? Object.fromEntries(
          run.species.map((s, i) => [
            s,
            {
              fed: quantity(balance.fed[i], amount(i)),
              left: quantity(balance.left[i], amount(i)),
              made: quantity(balance.made[i], amount(i)),
              before: quantity(balance.before[i], amount(i)),
              held: quantity(balance.held[i], amount(i)),
            },
          ]),
        )
      : null,
    closure: balance ? Object.fromEntries(run.species.map((s, i) => [s, finite(balance.closure[i])])) : null,
    conserved: balance ? finite(balance.conserved) : null,
    ...(balance?.heat === undefined ? {} : { heat: finite(balance.heat) }),
    ...(run.stopped
      ? { stopped: { at: quantity(run.stopped.t, clock.unit), why: run.stopped.why, in: run.stopped.node } }
      : {}),
  };
}

/** Where a removal is infinite, there is no number. */
const extremeJson = ({ value, why, at }: NonNullable<TransientFigure["range"]>["lowest"], unit: Unit) => ({
  value: finite(value),
  ...(why ? { why } : {}),
  at: quantity(at, unit),
});
