import { dutyCautions } from "../report/duty-cautions.js";
import { plotSweep } from "../report/study/sweep-figure.js";
import { countsOf } from "../study/counts.js";
import { inputsOf } from "../study/inputs.js";
import { type Sweep, sweep } from "../study/sweep.js";
import { inUnit } from "../units/unit.js";
import type { Context } from "./context.js";
import { sweepCsv, sweepJson } from "./json/sweep.js";
import { type Outcome, UsageError } from "./outcome.js";
import { progressOn } from "./progress.js";
import { axisFrom } from "./ranges.js";
import { type Asked, carriedBeside, type SweepOptions } from "./sweep-options.js";
import { curvesOn } from "./text/plot.js";
import { sweepText } from "./text/sweep.js";
import { blocks } from "./text/table.js";

/** `sweep --over`: every reported figure at every point. */
export async function overOutcome(asked: Asked, options: SweepOptions, { io }: Context): Promise<Outcome> {
  const { operation, rows } = asked;
  const { output } = options;
  const ending = output === undefined ? undefined : (/\.(\w+)$/.exec(output)?.[1].toLowerCase() ?? "");
  if (ending !== undefined && !["csv", "svg", "png"].includes(ending)) {
    throw new UsageError(`-o '${output}': write to .csv, .svg or .png`);
  }
  if (operation.duty.report.length === 0) {
    throw new UsageError(`the duty '${operation.duty.title}' reports nothing: list figures under \`report:\``);
  }
  const inputs = [...inputsOf(operation), ...countsOf(operation)];
  const axes = (options.over ?? []).map((text) => axisFrom(text, inputs));
  if (axes.length === 2 && axes[0].input === axes[1].input) throw new UsageError("--over: two different inputs");
  const progress = progressOn(io);
  const found = sweep(operation, axes, rows, {
    cancelled: io.cancelled,
    progress: (done) => progress.say(`sweep: ${Math.round(100 * done)} %`),
  });
  progress.done();
  if (output !== undefined) io.write(output, await contentOf(ending ?? "", found));
  const possible = found.points.some((p) => p.figures);
  return {
    status: found.stopped ? 130 : possible ? 0 : 1,
    text: blocks(
      sweepText(
        found,
        carriedBeside(
          asked.carries,
          rows,
          axes.map((a) => a.input),
        ),
      ),
      curvesOn(io, () => terminalCurves(found)),
      output === undefined ? "" : `  written: ${output}`,
    ),
    json: {
      ok: possible && !found.stopped,
      network: operation.network.title,
      duty: operation.duty.title,
      ...sweepJson(found),
      cautions: dutyCautions(operation.duty).map((c) => c.says),
      ...(output === undefined ? {} : { written: output }),
    },
    notes: [
      ...(found.stopped ? ["backmix: interrupted; what was finished is printed"] : []),
      ...(possible || found.stopped ? [] : ["backmix: no point of the sweep is possible"]),
    ],
  };
}

async function contentOf(ending: string, found: Sweep): Promise<string | Uint8Array> {
  if (ending === "csv") return sweepCsv(found);
  const { drawing } = plotSweep(found, ending === "png" ? { theme: "light" } : {});
  return ending === "png" ? (await import("./png.js")).pngOf(drawing) : `${drawing}\n`;
}

/** Each figure over the one input. */
function terminalCurves({ axes, points, operation }: Sweep) {
  if (axes.length !== 1) return [];
  const [{ input }] = axes;
  return operation.duty.report.flatMap((line, k) => {
    const whole = points.filter((p) => p.figures && Number.isFinite(p.figures[k].value));
    const unit = whole[0]?.figures?.[k].unit;
    if (!unit) return [];
    return [
      {
        label: line.text,
        x: whole.map((p) => inUnit(p.at[0], input.unit)),
        xUnit: input.unit.name,
        y: whole.map((p) => inUnit(p.figures?.[k].value ?? Number.NaN, unit)),
        yUnit: unit.name,
      },
    ];
  });
}
