import { checkTrial } from "../check/trial.js";
import { parseNetwork } from "../parse/network.js";
import { parseTrial } from "../parse/trial.js";
import { planTest } from "../plan/plan.js";
import { sheetHtml, sheetMarkdown } from "../plan/sheet.js";
import { tellApart } from "../plan/tell-apart.js";
import { collector } from "../problems/report.js";
import { trialOn } from "../resolve/trial-on.js";
import type { Context } from "./context.js";
import { requireParameters } from "./free.js";
import { apartJson, planJson } from "./json/plan.js";
import { InputError, type Outcome, UsageError } from "./outcome.js";
import { requireTracer } from "./require-tracer.js";
import { apartText } from "./text/apart.js";
import { planText } from "./text/plan.js";
import { blocks } from "./text/table.js";
import { oneTime } from "./times.js";

export interface PlanCommandOptions {
  readonly trial: string;
  readonly free?: readonly string[];
  readonly until?: string;
  readonly samples: number;
  readonly every?: string;
  readonly output?: string;
  readonly against?: string;
}

/** Most samples of a planned reading. */
const mostSamples = 2000;

/** `plan NETWORK --trial draft.yaml`: a tracer test before it is run. */
export function plan(file: string, options: PlanCommandOptions, { inputs, io }: Context): Outcome {
  const sheet = options.output;
  if (sheet !== undefined && !/\.(md|html)$/.test(sheet))
    throw new UsageError("-o writes a field sheet: F.md or F.html");
  if (options.samples > mostSamples) throw new UsageError(`--samples: ${mostSamples} is the most`);
  const until = options.until === undefined ? undefined : oneTime(options.until, "--until", '"6 h"');
  const every = options.every === undefined ? undefined : oneTime(options.every, "--every", '"10 s"');
  const network = inputs.document(file, parseNetwork);
  const declared = inputs.document(options.trial, parseTrial);
  requireTracer(declared, "`plan`");
  const { report, problems } = collector();
  checkTrial(network, declared, report);
  inputs.accept(problems);
  const trial = trialOn(network, declared);
  if (options.free) requireParameters(network, options.free);
  const { plan: found, problems: why } = planTest(network, trial, {
    samples: options.samples,
    until: until?.si,
    every: every?.si,
    free: options.free,
  });
  if (!found) throw new InputError(why);
  const rival = options.against === undefined ? undefined : inputs.document(options.against, parseNetwork);
  const apart = rival && tellApart(network, rival, trial, found);
  const time = until?.unit ?? network.units.time;
  if (sheet !== undefined) {
    const titles = { network: network.title, trial: trial.title };
    io.write(sheet, sheet.endsWith(".html") ? sheetHtml(found, titles, time) : sheetMarkdown(found, titles, time));
  }
  return {
    status: 0,
    text: blocks(
      planText(network.title, trial.title, found, time),
      rival && apart ? apartText(rival.title, apart, time) : "",
      sheet === undefined ? "" : `  field sheet: ${sheet}`,
    ),
    json: {
      ok: true,
      network: network.title,
      trial: trial.title,
      ...planJson(found, time),
      ...(rival && apart ? { against: { network: rival.title, tests: apart.map((a) => apartJson(a, time)) } } : {}),
      ...(sheet === undefined ? {} : { written: sheet }),
    },
    problems: why,
  };
}
