import type { Plant } from "../../compile/plant.js";
import { aggregated, outermost } from "../../draw/aggregate.js";
import { plotCurves } from "../../draw/curves.js";
import { flowSheet } from "../../draw/flow-sheet.js";
import { drawNetwork } from "../../draw/network.js";
import { sheetTable } from "../../draw/sheet-table.js";
import { settlingTime, tracerResponse } from "../../simulate/tracer.js";
import { inUnit } from "../../units/unit.js";
import type { Figure } from "../input.js";

/** Larger plants take longer than a save should. */
const largestPlant = 600;
const points = 240;

/** The flow diagram at the file's own values, and what its outlets would see of a pulse. */
export function networkFigures(plant: Plant): Figure[] {
  return [diagram(plant, "vessel"), ...pulse(plant)];
}

export function diagram(plant: Plant, name: string): Figure {
  const sheet = aggregated(flowSheet(plant), outermost(plant.network));
  return {
    name,
    drawing: drawNetwork(sheet),
    data: { table: sheetTable(sheet) },
    caption: "At the values of the file. Area is volume, width is flow.",
  };
}

function pulse(plant: Plant): Figure[] {
  const feed = plant.feeds[0]?.name;
  if (feed === undefined || plant.outlets.length === 0 || plant.columns.size > largestPlant) return [];
  const end = settlingTime(plant, feed);
  if (!(end > 0) || !Number.isFinite(end)) return [];
  const result = tracerResponse(
    plant,
    { at: feed, form: "pulse" },
    Float64Array.from({ length: points }, (_, k) => (end * k) / (points - 1)),
  );
  if (result.stopped) return [];
  const { time } = plant.network.units;
  const x = result.times.map((t) => inUnit(t, time));
  return [
    {
      name: "pulse",
      ...plotCurves(
        {
          title: `A pulse into '${feed}'`,
          x: `time, ${time.name}`,
          y: `E, exit age (c\u00b7Q / amount), 1/${time.name}`,
          lines: result.readings.map((r) => ({
            label: r.at,
            x,
            y: r.value.map((v) => v * time.factor),
            spikes: r.spikes.slice(0, 6).map((s) => ({ x: inUnit(s.time, time), area: s.area })),
          })),
        },
        { untitled: true },
      ),
      caption: `What the outlets see of a unit pulse into '${feed}' (${result.engine}).`,
    },
  ];
}
