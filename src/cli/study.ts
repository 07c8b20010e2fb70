import { uncarried } from "../compile/carried.js";
import { compile } from "../compile/compile.js";
import { parseStudy } from "../parse/study.js";
import { beside } from "../read/paths.js";
import { allFigures } from "../report/all-figures.js";
import type { StudyReport } from "../report/input.js";
import { writeSummary } from "../report/markdown.js";
import { writeReport } from "../report/report.js";
import { reportOf } from "../report/study/build.js";
import { untraceable } from "../simulate/trace.js";
import type { Ranked, StudyResult } from "../study/result.js";
import { runStudy } from "../study/run.js";
import type { Context } from "./context.js";
import type { ExitStatus, Io } from "./io.js";
import { studyJson } from "./json/study.js";
import { partsLibrary } from "./library.js";
import type { Outcome } from "./outcome.js";
import { progressOn } from "./progress.js";
import { studyText } from "./text/study.js";
import { version } from "./version.js";

export interface StudyOptions {
  readonly output?: string;
  readonly starts?: number;
}

/** `study FILE`: every rival fitted, every duty predicted, every change compared, one report. */
export async function study(file: string, options: StudyOptions, { inputs, io }: Context): Promise<Outcome> {
  const document = inputs.document(file, parseStudy);
  for (const { network } of document.rivals) {
    const { plant } = compile(network);
    if (plant)
      inputs.accept([...untraceable(plant), ...(document.duties.length > 0 ? uncarried(plant, "reaction") : [])]);
  }
  const folder = options.output ?? (document.out === undefined ? undefined : beside(file, document.out));
  // Before the work: a folder that cannot be written is no surprise to keep for its end.
  if (folder !== undefined) io.makeFolder(beside(`${folder}/`, "figures"));
  const progress = progressOn(io);
  const result = runStudy(document, {
    cancelled: io.cancelled,
    library: partsLibrary(),
    progress: ({ stage, what, done }) => progress.say(`study: ${Math.round(100 * done)} %, ${stage} ${what}`),
    ...(options.starts === undefined ? {} : { starts: options.starts }),
  });
  progress.done();
  const status: ExitStatus = result.stopped ? 130 : result.converged ? 0 : 3;
  const files = await inputs.list();
  const report = reportOf(result, { files, version, command: commandLine(file, options) });
  const { answer } = report;
  const json = { ok: status === 0, ...studyJson(result), answer: answer.map((a) => `${a.about}: ${a.says}`) };
  // Half a study must not take the place of a whole report.
  const path = folder === undefined || result.stopped ? undefined : save(folder, report, io);
  if (folder !== undefined && path !== undefined) {
    const whole = { backmix: version, command: "study", inputs: files, ...json, report: path };
    io.write(beside(`${folder}/`, "result.json"), `${JSON.stringify(whole)}\n`);
  }
  return {
    status,
    text: studyText(result, answer, path),
    json: { ...json, report: path ?? null },
    notes: notesOf(status, result, folder, path),
  };
}

/** Writes the drawings, the summary and, last, the page that shows them all; gives its path. */
function save(folder: string, report: StudyReport, io: Io): string {
  for (const { name, drawing } of allFigures(report))
    io.write(beside(`${folder}/`, `figures/${name}.svg`), `${drawing}\n`);
  io.write(beside(`${folder}/`, "summary.md"), writeSummary(report));
  const page = beside(`${folder}/`, "report.html");
  io.write(page, writeReport(report));
  return page;
}

/** What makes the same numbers again: where the report was written is not part of that. */
const commandLine = (file: string, { starts }: StudyOptions): string =>
  ["backmix study", file, ...(starts === undefined ? [] : ["--starts", starts])].join(" ");

function notesOf(
  status: ExitStatus,
  result: StudyResult,
  folder: string | undefined,
  path: string | undefined,
): string[] {
  if (status === 130) return ["backmix: interrupted; what was finished is printed, no report is written"];
  const { ranking } = result;
  const noFolder = folder === undefined ? ["backmix: no report is written; name a folder with -o or `out:`"] : [];
  if (status !== 3) return noFolder;
  const where = path === undefined ? "" : "; the report says which";
  const notFitted = ranking.filter((r) => !r.fit && (result.study.trials.length > 0 || !r.plant));
  const ended = ranking.some((r) => r.fit && !r.fit.converged);
  return [
    ...noFolder,
    ...(ended ? [`backmix: a fit did not converge${where}`] : []),
    ...(notFitted.length > 0 ? [`backmix: not fitted: ${[...new Set(notFitted.map(whyNot))].join("; ")}`] : []),
  ];
}

const whyNot = ({ problems }: Ranked): string => problems[0]?.message ?? "no fit was found";
