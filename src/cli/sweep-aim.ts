import { collector } from "../problems/report.js";
import type { ScalarNode } from "../read/tree.js";
import { dutyCautions } from "../report/duty-cautions.js";
import { resolveAim } from "../resolve/aim.js";
import { type AimRange, solveAim } from "../study/aim.js";
import { type Input, inputsOf } from "../study/inputs.js";
import { formatQuantity } from "../units/format.js";
import { inUnit } from "../units/unit.js";
import type { Context } from "./context.js";
import { aimJson } from "./json/sweep.js";
import { type Outcome, UsageError } from "./outcome.js";
import { progressOn } from "./progress.js";
import { inputNamed, rangeFrom, requireNoCount } from "./ranges.js";
import { type Asked, carriedBeside, type SweepOptions } from "./sweep-options.js";
import { aimText } from "./text/aim.js";

/** `sweep --aim … --by name`: the values of one input at which a figure is what it shall be. Exit 1 where none is. */
export function aimOutcome({ operation, rows, carries }: Asked, options: SweepOptions, { io }: Context): Outcome {
  const { report, problems } = collector();
  const aim = resolveAim(scalar(options.aim ?? ""), operation.duty, report);
  if (!aim) throw new UsageError(`--aim: ${problems.map((p) => `${p.message}; ${p.fix}`).join("; ")}`);
  if (options.by === undefined) throw new UsageError("--aim needs --by NAME: the input that may move");
  requireNoCount(options.by, operation.network, "--by");
  const input = inputNamed(options.by, inputsOf(operation), "--by");
  const range = rangeOf(input, options.between);
  const confidence = options.confidence === undefined ? undefined : shareFrom(options.confidence);
  if (confidence !== undefined && rows.length === 0) {
    throw new UsageError("--confidence: nothing is unsure here; declare a `±`, fit with --trial, or leave it out");
  }
  const progress = progressOn(io);
  const found = solveAim(operation, aim, range, {
    rows,
    ...(confidence === undefined ? {} : { confidence }),
    cancelled: io.cancelled,
    progress: (done) => progress.say(`aim: ${Math.round(100 * done)} %`),
  });
  progress.done();
  const reachable = found.crossings.length > 0 || found.met.length > 0;
  return {
    status: found.stopped ? 130 : reachable ? 0 : 1,
    text: aimText(operation, found, carriedBeside(carries, rows, [input])),
    json: {
      ok: reachable && !found.stopped,
      network: operation.network.title,
      duty: operation.duty.title,
      ...aimJson(found),
      cautions: dutyCautions({ ...operation.duty, report: [...operation.duty.report, aim.line] }).map((c) => c.says),
    },
    notes: found.stopped ? ["backmix: interrupted; what was looked at is printed"] : [],
  };
}

function rangeOf(input: Input, between: string | undefined): AimRange {
  if (between !== undefined) {
    const { from, to, log } = rangeFrom(between, input, `--between '${between}'`);
    return { input, from, to, log: log || (input.log && from > 0) };
  }
  if (!input.between) {
    const example = `${formatQuantity(0.5 * input.value, input.unit, 2)}..${formatQuantity(2 * input.value, input.unit, 2)}`;
    const shown = inUnit(input.value, input.unit) === 0 ? "0..1" : example;
    throw new UsageError(`--by: '${input.name}' has no \`between:\`; say where to look: --between "${shown}"`);
  }
  return { input, from: input.between[0], to: input.between[1], log: input.log };
}

/** `90 %` or `0.9`. */
function shareFrom(text: string): number {
  const found = /^(\d+(?:\.\d+)?)\s*(%?)$/.exec(text.trim());
  const share = found ? Number(found[1]) / (found[2] === "%" ? 100 : 1) : Number.NaN;
  if (!(share >= 0.5 && share < 1)) {
    throw new UsageError(`--confidence '${text}': write a share from 50 % to below 100 %, such as "90 %"`);
  }
  return share;
}

function scalar(text: string): ScalarNode {
  const at = { source: { path: "--aim", text }, from: 0, to: text.length };
  return { type: "scalar", at, text, plain: true, empty: text.trim() === "" };
}
