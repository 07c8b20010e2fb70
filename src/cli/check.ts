import type { Plant } from "../compile/plant.js";
import { parseNetwork } from "../parse/network.js";
import type { ParseOptions } from "../parse/parsed.js";
import { githubAnnotations } from "../problems/formats/github.js";
import { sarifLog } from "../problems/formats/sarif.js";
import { problemJson } from "../problems/json.js";
import { printProblems } from "../problems/print.js";
import type { Problem } from "../problems/problem.js";
import { hasErrors } from "../problems/report.js";
import type { Context } from "./context.js";
import { networkJson } from "./json/network.js";
import type { Outcome } from "./outcome.js";
import { networkText } from "./text/network.js";
import { blocks } from "./text/table.js";
import { version } from "./version.js";

export interface CheckOptions {
  readonly format: "text" | "json" | "github" | "sarif";
}

/** What one file came to. */
interface Checked {
  readonly file: string;
  readonly kind: string | undefined;
  readonly problems: readonly Problem[];
  readonly plant: Plant | undefined;
  /** What was understood of a document of another sort, for people. */
  readonly says?: () => string;
}

/** `check FILE…`: every problem of every file; of a sound network its balance. */
export async function check(
  files: readonly string[],
  { format }: CheckOptions,
  { inputs, io }: Context,
): Promise<Outcome> {
  const checked: Checked[] = [];
  for (const file of files) {
    const text = inputs.text(file);
    if (typeof text !== "string") checked.push({ file, kind: undefined, problems: [text], plant: undefined });
    else checked.push({ file, ...(await parsed(text, inputs.options(file))) });
  }
  const problems = checked.flatMap((c) => c.problems);
  const ok = !hasErrors(problems);
  return {
    status: ok ? 0 : 1,
    text: textOf(checked, problems, format, io.colour.out),
    // Made when asked for.
    get json() {
      return {
        ok,
        files: checked.map((c) => ({
          file: c.file,
          ok: !hasErrors(c.problems),
          kind: c.kind ?? null,
          problems: c.problems.map(problemJson),
          ...(c.plant ? { network: networkJson(c.plant) } : {}),
        })),
        problems: problems.map(problemJson),
      };
    },
  };
}

/** What reads all sorts of documents is loaded only where a sound network is not all there is: starting is most of a check. */
async function parsed(text: string, options: ParseOptions): Promise<Omit<Checked, "file">> {
  const sound = /^(?:[ \t]*(?:#.*)?\r?\n)*network:/.test(text) && !/^change:/m.test(text);
  const alone = sound ? parseNetwork(text, options) : undefined;
  if (alone?.document) return { kind: "network", problems: alone.problems, plant: alone.document.start };
  const { parseAny } = await import("../parse/any.js");
  const any = parseAny(text, options);
  const { kind, network, problems } = any;
  const { understoodText } = await import("./text/understood.js");
  return { kind, problems, plant: network?.start, says: () => understoodText(any) };
}

function textOf(
  checked: readonly Checked[],
  problems: readonly Problem[],
  format: CheckOptions["format"],
  colour: boolean,
): string {
  if (format === "github") return githubAnnotations(problems);
  if (format === "sarif") return JSON.stringify(sarifLog(problems, version), null, 2);
  return checked.map((c) => say(c, colour)).join("\n\n");
}

function say({ file, kind, problems, plant, says }: Checked, colour: boolean): string {
  const errors = problems.filter((p) => p.severity === "error").length;
  const warnings = problems.length - errors;
  const counts = [
    errors > 0 ? counted(errors, "error") : "ok",
    ...(warnings > 0 ? [counted(warnings, "warning")] : []),
  ];
  const head = `${file}: ${kind ? `${kind}, ` : ""}${counts.join(", ")}`;
  return blocks(
    head,
    problems.length > 0 ? printProblems(problems, { colour }) : "",
    plant ? networkText(plant) : says?.(),
  );
}

const counted = (n: number, word: string): string => `${n} ${word}${n === 1 ? "" : "s"}`;
