import { problemJson } from "../problems/json.js";
import type { Problem } from "../problems/problem.js";
import { tidy } from "../tidy/tidy.js";
import type { Context } from "./context.js";
import { type Outcome, UsageError } from "./outcome.js";

export interface TidyOptions {
  readonly check?: true;
}

/** What one file came to. */
interface Outdone {
  readonly file: string;
  readonly is: "tidy" | "untidy" | "refused";
  readonly text: string | undefined;
  readonly problems: readonly Problem[];
}

/** `tidy FILE…`: rewrites what is not in canonical form; with `--check` only says so. Standard input goes to standard output. */
export function tidyFiles(files: readonly string[], { check }: TidyOptions, { inputs, io }: Context): Outcome {
  if (files.includes("-") && files.length > 1) throw new UsageError("- (standard input) stands alone");
  const done = files.map((file): Outdone => {
    const before = inputs.text(file);
    if (typeof before !== "string") return { file, is: "refused", text: undefined, problems: [before] };
    const { text, problems } = tidy(before, { path: file });
    return { file, is: text === undefined ? "refused" : text === before ? "tidy" : "untidy", text, problems };
  });
  if (!check) {
    for (const { file, is, text } of done) if (is === "untidy" && file !== "-") io.write(file, text as string);
  }
  const failed = done.some(({ is }) => is === "refused" || (check && is === "untidy"));
  const piped = !check && done[0].file === "-" ? done[0].text : undefined;
  return {
    status: failed ? 1 : 0,
    text: piped ?? done.map(({ file, is }) => `${file}: ${words(is, check === true)}`).join("\n"),
    json: {
      ok: !failed,
      files: done.map(({ file, is, problems }) => ({
        file,
        ok: is === "tidy" || (is === "untidy" && !check),
        tidy: is === "refused" ? null : is === "tidy",
        written: !check && is === "untidy" && file !== "-",
        problems: problems.map(problemJson),
      })),
      ...(piped === undefined ? {} : { text: piped }),
    },
    problems: done.flatMap(({ problems }) => problems),
  };
}

const words = (is: Outdone["is"], check: boolean): string =>
  is === "untidy" ? (check ? "not tidy" : "tidied") : is === "tidy" ? "tidy" : "left alone";
