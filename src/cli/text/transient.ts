import type { Plant } from "../../compile/plant.js";
import type { Duty } from "../../model/duty.js";
import { temperatureUnit } from "../../reaction/figures.js";
import { amountUnit, speciesUnits } from "../../reaction/species-units.js";
import { dutyCautions } from "../../report/duty-cautions.js";
import { type AtEnd, atEnd } from "../../transient/at-end.js";
import type { TransientFigure } from "../../transient/figures.js";
import { passageOf } from "../../transient/passage.js";
import { closes, type Transient } from "../../transient/transient.js";
import { type Dimension, dimensions } from "../../units/dimension.js";
import { formatNumber, formatQuantity } from "../../units/format.js";
import { inUnit } from "../../units/unit.js";
import type { Clock } from "../times.js";
import { reportedText } from "./steady.js";
import { blocks, pairs, table, wrap } from "./table.js";

const starts = { steady: "from the steady state before the change", contents: "from what the duty says is there" };

/**
 * A duty in time, for people.
 * @param looks inner places to tell of beside the outlets; those of a closed vessel are told of anyway
 */
export function transientText(
  plant: Plant,
  duty: Duty,
  run: Transient,
  figures: readonly TransientFigure[],
  clock: Clock,
  looks: readonly string[],
): string {
  const until = clock.shown[clock.shown.length - 1];
  const start = run.start === "contents" && !duty.contents ? "from clean liquid" : starts[run.start];
  return blocks(
    `${plant.network.title}: ${duty.title}, ${start}, to ${formatNumber(until)} ${clock.unit.name}${run.stopped ? " (stopped too soon)" : ""}`,
    run.stopped ? "" : passages(plant, duty, run, clock, looks),
    figuresText(plant, duty, run, figures, clock),
    endText(duty, run),
    balanceText(run),
    dutyCautions(duty)
      .map((c) => wrap("  caution  ", c.says))
      .join("\n"),
  );
}

const restless: Readonly<Record<AtEnd, string>> = {
  settled: "",
  changes:
    "What leaves still changes at the end of this run: figures at the end are of one moment on its way. A longer run (--until) shows where it goes.",
  swings:
    "What leaves still swings at the end of this run: figures at the end are one point of the swing, not what it makes on average. Lowest and highest above tell how far it goes.",
};

/** That figures as they stand at the end are not those of a vessel at rest. */
function endText({ report }: Duty, run: Transient): string {
  const asked = report.some((line) => line.what !== "time-beyond" && line.what !== "tracer-time");
  const says = asked ? restless[atEnd(run)] : "";
  return says === "" ? "" : wrap("  ", says);
}

function passages(plant: Plant, duty: Duty, run: Transient, { si, unit }: Clock, looks: readonly string[]): string {
  const units = speciesUnits(plant.network, duty, run.species);
  const until = si[si.length - 1];
  const shown = plant.outlets.length === 0 && looks.length === 0 ? run.places.map((p) => p.name) : looks;
  const places = [...run.outlets.filter((o) => o.flow > 0).map((o) => o.name), ...shown];
  const right = (title: string) => ({ title, align: "right" as const });
  const time = (t: number | undefined): string => (t === undefined ? "" : formatNumber(inUnit(t, unit)));
  const heated = run.outlets.some((o) => o.temperatures) || run.places.some((p) => p.temperatures);
  const components = heated ? [...run.species, "temperature"] : run.species;
  const inUnits = heated ? [...units, temperatureUnit(duty)] : units;
  // What comes back to where it was has no way to be done with: where all does, as after an upset, no column is kept empty.
  const passed = places.flatMap((name) =>
    components.map((s, i) => ({ name, s, i, ...passageOf(run.look(name), components.length, i, until) })),
  );
  const moves = passed.some((p) => p.t1 !== undefined);
  const rows = passed.map(({ name, s, i, first, last, lowest, highest, t1, t99 }) => {
    const say = (c: number): string => formatNumber(inUnit(c, inUnits[i]));
    const unitText = inUnits[i].name ? `, ${inUnits[i].name}` : "";
    return [
      `${s} at ${name}${unitText}`,
      say(first),
      say(last),
      `${say(lowest.value)} at ${time(lowest.at)}`,
      `${say(highest.value)} at ${time(highest.at)}`,
      ...(moves ? [time(t1), time(t99)] : []),
    ];
  });
  return table(
    [
      { title: "leaving" },
      right("first"),
      right("last"),
      right(`lowest, ${unit.name}`),
      right(`highest, ${unit.name}`),
      ...(moves ? [right(`1 % done, ${unit.name}`), right("99 % done")] : []),
    ],
    rows,
  );
}

/** Stretches beyond a limit that are told one by one. */
const mostSpans = 3;

function figuresText(
  plant: Plant,
  duty: Duty,
  run: Transient,
  figures: readonly TransientFigure[],
  clock: Clock,
): string {
  if (figures.length === 0) return "";
  const { units } = plant.network;
  const rows = figures.map((f, k) => {
    if (!f.beyond) return [f.name, reportedText(f), rangeText(f, clock)];
    const i = run.species.indexOf(duty.report[k].of);
    const { spans, volume, amount, stillAtEnd } = f.beyond;
    const held =
      amount === undefined ? "" : ` with ${amountText(plant, duty.concentrations[i], amount)}${duty.report[k].of}`;
    const at = (t: number): string => formatNumber(inUnit(t, clock.unit));
    const listed = spans.slice(0, mostSpans).map(({ from, to }) => `${at(from)} to ${at(to)}`);
    const more = spans.length > mostSpans ? ` and ${spans.length - mostSpans} more` : "";
    const side = duty.report[k].limit?.side ?? "beyond";
    const still = stillAtEnd ? `, still ${side} at the end of the run` : "";
    const when = spans.length === 0 ? "never" : `${listed.join(", ")}${more} ${clock.unit.name}${still}`;
    const left =
      spans.length === 0 || volume === 0
        ? ""
        : `; meanwhile ${formatQuantity(volume, units.unitFor(dimensions.volume))} left${held}`;
    return [f.name, `${stillAtEnd ? "at least " : ""}${formatQuantity(f.value, clock.unit)}`, `${when}${left}`];
  });
  return table([{ title: "figure, at the end" }, { title: "value", align: "right" }, { title: "" }], rows);
}

/** "2.5 mol of ", or "9.5e8 " of what is counted. */
function amountText({ network }: Plant, concentration: Dimension, amount: number): string {
  const unit = amountUnit(network, concentration);
  return `${formatQuantity(amount, unit)} ${unit.name === "" ? "" : "of "}`;
}

/** How far a figure went meanwhile: at its end an upset is over, and says nothing. */
function rangeText({ range, ...figure }: TransientFigure, { unit }: Clock): string {
  if (!range) return "";
  const at = (end: "lowest" | "highest"): string =>
    `${end} ${reportedText({ ...figure, value: range[end].value, why: range[end].why })} at ${formatQuantity(range[end].at, unit)}`;
  return `${at("lowest")}, ${at("highest")}`;
}

function balanceText({ balance }: Transient): string {
  if (!balance) return "";
  const worst = balance.closure.reduce((most, c) => Math.max(most, Math.abs(c)), 0);
  const heat = balance.heat === undefined ? "" : `, heat to ${formatNumber(Math.abs(balance.heat), 1)}`;
  const { off } = balance;
  return blocks(
    pairs([
      [
        "balances",
        `every species closes to ${formatNumber(worst, 1)}, what no reaction changes to ${formatNumber(balance.conserved, 1)}${heat}`,
      ],
    ]),
    off > closes
      ? wrap(
          "  warning  ",
          `The balances of this run are off by ${formatNumber(off, 1)}, where 1e-9 is usual: amounts, and times beyond a limit, may be wrong by as much. Do not rely on them; please report the files.`,
        )
      : "",
  );
}
