import { parseStudy } from "../parse/study.js";
import { beside } from "../read/paths.js";
import { runStudy } from "../study/run.js";
import type { Context } from "./context.js";
import type { ExitStatus } from "./io.js";
import { studyJson } from "./json/study.js";
import type { Outcome } from "./outcome.js";
import { progressOn } from "./progress.js";
import { studyText } from "./text/study.js";

export interface StudyOptions {
  readonly output?: string;
  readonly starts?: number;
}

/** `study FILE`: every rival fitted, every duty predicted, every change compared, one report. */
export function study(file: string, { output, starts }: StudyOptions, { inputs, io }: Context): Outcome {
  const document = inputs.document(file, parseStudy);
  const progress = progressOn(io);
  const result = runStudy(document, {
    cancelled: io.cancelled,
    progress: ({ stage, what, done }) => progress.say(`study: ${Math.round(100 * done)} %, ${stage} ${what}`),
    ...(starts === undefined ? {} : { starts }),
  });
  progress.done();
  const status: ExitStatus = result.stopped ? 130 : result.converged ? 0 : 3;
  const folder = output ?? (document.out === undefined ? undefined : beside(file, document.out));
  return { status, text: studyText(result), json: { ok: status === 0, ...studyJson(result), folder: folder ?? null } };
}
