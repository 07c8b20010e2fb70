import type { Plant } from "../../compile/plant.js";
import { aggregated, outermost } from "../../draw/aggregate.js";
import { flowSheet } from "../../draw/flow-sheet.js";
import { drawNetwork } from "../../draw/network.js";
import { sheetTable } from "../../draw/sheet-table.js";
import type { Fit } from "../../fit/result.js";
import type { Trial } from "../../model/trial.js";
import type { Value } from "../../model/value.js";
import type { Ranked } from "../../study/result.js";
import { holdUp } from "../../units/basis.js";
import { dimensions } from "../../units/dimension.js";
import { formatNumber } from "../../units/format.js";
import type { Unit } from "../../units/unit.js";
import { estimateWords } from "../digits.js";
import type { Estimate, Figure } from "../input.js";
import { estimate, percent } from "./estimate.js";
import { intervalOf } from "./interval-of.js";
import { traitsOf } from "./traits.js";

/** The vessel as fitted, or as written where nothing was fitted: what the reader should look at is marked, what the fit moved is underlined and bears its interval. */
export function vesselFigure(ranked: Ranked, trials: readonly Trial[]): Figure | undefined {
  const { plant, fit, rival } = ranked;
  if (!plant) return undefined;
  const sheet = flowSheet(plant, {
    injections: trials.flatMap((t) => t.injections.map((i) => i.at)),
    probes: trials.flatMap((t) => t.readings.map((r) => r.at)),
    ...(fit
      ? {
          notes: new Map([...volumeNotes(plant, fit), ...flowNotes(plant, fit)]),
          accents: new Set(traitsOf(plant, fit).map((t) => t.place)),
        }
      : {}),
  });
  const hold = holdUp(plant.network.basis);
  return {
    name: "vessel",
    drawing: drawNetwork(aggregated(sheet, outermost(plant.network)), { untitled: true }),
    data: { table: sheetTable(sheet) },
    caption: `The vessel ${fit ? "as fitted by" : "as written in"} '${rival.network.title}', at the flow of the file. Area is ${hold}, width is flow${fit ? "; underlined is what the fit moved, with what it leaves possible (95 %)" : ""}.`,
  };
}

type Note = readonly [place: string, words: string];

function volumeNotes(plant: Plant, fit: Fit): readonly Note[] {
  const unit = plant.network.units.unitFor(dimensions.volume);
  return plant.network.compartments.flatMap((c) =>
    c.values.volume ? noted(c.name, c.values.volume, plant, fit, unit) : [],
  );
}

/** Of shares, flows and exchanges, by the way that they go (`feed>product`). */
function flowNotes(plant: Plant, fit: Fit): readonly Note[] {
  const { network } = plant;
  const unit = network.units.unitFor(dimensions.flow);
  const sent = [...network.feeds, ...network.compartments].flatMap(({ name, streams }) =>
    streams.flatMap(({ to, split }) =>
      "value" in split ? noted(`${name}>${to}`, split.value, plant, fit, split.is === "share" ? percent : unit) : [],
    ),
  );
  const exchanged = network.compartments.flatMap((c) =>
    c.exchanges.flatMap((e) => noted(`${c.name}>${e.partner}`, e.flow, plant, fit, unit)),
  );
  return [...sent, ...exchanged];
}

function noted(place: string, value: Value, plant: Plant, fit: Fit, unit: Unit): readonly Note[] {
  const known = intervalOf(value, plant, fit);
  const words = known && interval(estimate(value.of(plant.env), known, unit));
  return words ? [[place, unit === percent ? `${words}\u2009%` : words]] : [];
}

/** An interval with as many digits as the value before it is drawn with, where they tell its ends apart. */
function interval(of: Estimate): string {
  const { interval: words } = estimateWords(of);
  if (words === "" || of.low === undefined || of.high === undefined || !Number.isFinite(of.high - of.low)) return words;
  const [low, high] = [formatNumber(of.low, 3), formatNumber(of.high, 3)];
  return low === high ? words : `${low} to ${high}`;
}
