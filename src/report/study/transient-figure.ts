import type { Plant } from "../../compile/plant.js";
import { type Curves, type CurvesOptions, plotStacked } from "../../draw/curves.js";
import type { Plotted } from "../../draw/plotted.js";
import type { Duty } from "../../model/duty.js";
import { temperatureUnit } from "../../reaction/figures.js";
import type { Funnel } from "../../transient/funnel.js";
import type { Course, Transient } from "../../transient/transient.js";
import { formatQuantity } from "../../units/format.js";
import { inUnit, type Unit } from "../../units/unit.js";

/** How a duty goes on in time: one plot for each species (and the temperature), one line for each outlet, limits across. */
export function plotTransient(
  plant: Plant,
  duty: Duty,
  run: Transient,
  units: { readonly time: Unit; readonly species: readonly Unit[] },
  options: CurvesOptions = {},
): Plotted {
  const n = run.species.length;
  const courses = run.outlets.some((o) => o.flow > 0) ? run.outlets.filter((o) => o.flow > 0) : run.places;
  const x = Float64Array.from(run.times, (t) => inUnit(t, units.time));
  const time = `time, ${units.time.name}`;
  const words = (name: string, unit: Unit): string => (unit.name === "" ? name : `${name}, ${unit.name}`);
  const lines = (of: (course: Course, k: number) => number, unit: Unit) =>
    courses.map((course) => ({
      label: course.name,
      unnamed: courses.length === 1,
      x,
      y: Float64Array.from(x, (_, k) => inUnit(of(course, k), unit)),
    }));
  const plots: Curves[] = run.species.map((s, i) => {
    const unit = units.species[i];
    return {
      title: s,
      x: time,
      y: words(s, unit),
      lines: lines(({ values }, k) => values[k * n + i], unit),
      ...limitOf(duty, s, unit),
    };
  });
  if (courses.some((c) => c.temperatures)) {
    const unit = temperatureUnit(duty);
    plots.push({
      title: "temperature",
      x: time,
      y: words("temperature", unit),
      lines: lines(({ temperatures }, k) => temperatures?.[k] ?? Number.NaN, unit),
      free: true,
      ...limitOf(duty, "", unit),
    });
  }
  return plotStacked(`${plant.network.title}: ${duty.title}`, plots, {
    height: plots.length > 1 ? 150 : 240,
    ...options,
  });
}

/** The first limit of a species, or with "" of the temperature, as a level across. */
function limitOf(duty: Duty, of: string, unit: Unit): Pick<Curves, "level"> {
  const limit = duty.report.find((line) => line.what === "time-beyond" && line.of === of)?.limit;
  if (!limit) return {};
  const value = limit.value.of([]);
  return {
    level: { at: inUnit(value, unit), label: `limit ${formatQuantity(value, limit.value.unit ?? unit)}` },
  };
}

/** The limit curve of upsets: how far from what is usual may be fed for how long; above it the limit is passed. */
export function plotFunnel(
  duty: Duty,
  { feed, species, before, line, points, way }: Funnel,
  units: { readonly time: Unit; readonly species: Unit },
  options: CurvesOptions = {},
): Plotted {
  const height = (level: number | undefined): number =>
    level === undefined ? Number.NaN : Math.abs(inUnit(level, units.species) - inUnit(before, units.species));
  const x = points.map((p) => inUnit(p.lasting, units.time));
  const y = points.map((p) => height(p.level));
  const own = duty.feeds.get(feed)?.courses?.get(species);
  const marked = own?.is === "upset" && own.lasting !== undefined ? own : undefined;
  const curves: Curves = {
    title: `How far ${way > 0 ? "above" : "below"} ${formatQuantity(before, units.species)} ${species} in ${feed} may be, and for how long, before it brings '${line.text.replace(/^time /, "")}'`,
    x: `length of the upset, ${units.time.name}`,
    y: `how much ${way > 0 ? "higher" : "lower"} than the usual ${formatQuantity(before, units.species)}, ${units.species.name}`,
    lines: [{ label: "at the limit", x, y }],
    xLog: true,
    ...(marked
      ? {
          points: {
            x: [inUnit(marked.lasting ?? 0, units.time)],
            y: [height(marked.to.of([]))],
            label: "this duty's upset",
            named: true,
          },
        }
      : {}),
  };
  return plotStacked(
    `How far ${species} in ${feed} may be ${way > 0 ? "above" : "below"} ${formatQuantity(before, units.species)}, and how long`,
    [curves],
    { log: true, ...options },
  );
}
