import type { Network } from "../model/network.js";
import { type BranchPoint, nextTurns } from "../reaction/branches.js";
import { figuresOf } from "../reaction/figures.js";
import { steadyState } from "../reaction/steady.js";
import { type BranchPlot, plotBranches } from "../report/study/branch-figure.js";
import { inputsOf } from "../study/inputs.js";
import { noRow, type Operation, plantOf } from "../study/operate.js";
import { statesAlong, steadyLines } from "../study/states-along.js";
import { inUnit } from "../units/unit.js";
import type { Context } from "./context.js";
import { columnsCsv } from "./csv.js";
import { dutyFor } from "./duty-for.js";
import { branchesJson } from "./json/branches.js";
import { type Outcome, UsageError } from "./outcome.js";
import { plantAt } from "./plant.js";
import { progressOn } from "./progress.js";
import { inputNamed, rangeFrom, requireNoCount } from "./ranges.js";
import { settingsBeside } from "./settings.js";
import type { SimulateOptions } from "./simulate-options.js";
import { branchesText } from "./text/branches.js";
import { blocks } from "./text/table.js";

/** `simulate --duty F --states "name=a..b"`: all steady states over a range of one input, and where they end. */
export async function simulateStates(
  network: Network,
  options: SimulateOptions,
  over: string,
  { inputs, io }: Context,
): Promise<Outcome> {
  const { set, duty } = settingsBeside(network, options.set, dutyFor(inputs, options.duty ?? "", network));
  const option = `--states '${over}'`;
  const equals = over.indexOf("=");
  if (equals < 0) throw new UsageError(`${option}: write it like --states "feed.temperature=20 degC..80 degC"`);
  const ending = options.output === undefined ? undefined : (/\.(\w+)$/.exec(options.output)?.[1].toLowerCase() ?? "");
  if (ending !== undefined && !["csv", "svg", "png"].includes(ending)) {
    throw new UsageError(`-o '${options.output}': write to .csv, .svg or .png`);
  }
  const operation: Operation = { network, duty, values: set, kinetics: new Map() };
  requireNoCount(over.slice(0, equals).trim(), network, "--states");
  const input = inputNamed(over.slice(0, equals).trim(), inputsOf(operation), "--states");
  const { from, to, unit } = rangeFrom(over.slice(equals + 1).trim(), input, option);
  const reporting = { ...duty, report: steadyLines(duty) };
  if (reporting.report.length === 0)
    throw new UsageError(`the duty '${duty.title}' reports nothing to follow: list figures under \`report:\``);
  const row = { ...noRow, vessel: set };
  const present = plantOf(operation, row).plant ?? plantAt(network, set);
  const progress = progressOn(io);
  progress.say(`simulate: following steady states over ${input.name}`);
  const found = statesAlong(operation, input, [from, to], row);
  progress.done();
  const now = steadyState(present, duty.chemistry, reporting);
  const next = nextTurns(found, input.value, now);
  const figuresAt = ({ state }: Pick<BranchPoint, "state">) => figuresOf(present, reporting, state);
  const shown = { ...input, unit };
  const title = `${network.title}: ${duty.title}`;
  const plot: BranchPlot = { title, duty: reporting, input: shown, found, figuresAt };
  const { output } = options;
  if (output !== undefined) io.write(output, ending === "csv" ? csvOf(plot) : await pictureOf(plot, ending === "png"));
  const good = found.branches.length > 0;
  return {
    status: good ? 0 : 3,
    text: blocks(branchesText(plot, next, [from, to]), output === undefined ? "" : `  written: ${output}`),
    json: {
      ok: good,
      duty: duty.title,
      ...branchesJson(plot, next),
      ...(output === undefined ? {} : { written: output }),
    },
    notes: good ? [] : ["backmix: no steady state could be followed"],
  };
}

async function pictureOf(plot: BranchPlot, png: boolean): Promise<string | Uint8Array> {
  const { drawing } = plotBranches(plot, png ? { theme: "light" } : {});
  return png ? (await import("./png.js")).pngOf(drawing) : `${drawing}\n`;
}

/** One row per point, branch after branch. */
function csvOf({ input, found, figuresAt }: BranchPlot): string {
  const rows = found.branches.flatMap((points, b) => points.map((point) => ({ b, point, figures: figuresAt(point) })));
  const names = rows[0]?.figures ?? [];
  const header = [
    "branch",
    `${input.name} [${input.unit.name || "1"}]`,
    "stable",
    ...names.map((f) => `${f.name} [${f.unit.name || "1"}]`),
  ];
  return columnsCsv(
    header,
    rows.length,
    (k) => String(rows[k].b + 1),
    (k, i) => {
      const { point, figures } = rows[k];
      if (i === 0) return inUnit(point.at, input.unit);
      if (i === 1) return point.stable === undefined ? Number.NaN : Number(point.stable);
      return inUnit(figures[i - 2].value, figures[i - 2].unit);
    },
  );
}
