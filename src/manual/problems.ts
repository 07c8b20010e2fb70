import { catalogueGroups } from "../problems/catalogue.js";
import type { CatalogueEntry } from "../problems/problem.js";
import { block, parts } from "./markdown.js";

/** A document that is wrong, and what the program says of it. */
export interface Broken {
  readonly file: string;
  readonly document: string;
  readonly printed: string;
}

/** Every code of the catalogue, each with a document that shows it, or with its wording. */
export function problemsSection(broken: readonly Broken[]): string {
  return parts(
    "A problem reads `file:line:column code: what is wrong`, then the line with a mark, then `fix:` and a way out. Errors make a command end with status 1; " +
      "a `warning` is legal but odd. All problems of a file are told at once. Scripts take them from `check --format json`, `github` or `sarif`.",
    ...Object.entries(catalogueGroups).map(([title, entries]) =>
      parts(
        `### ${title}`,
        ...Object.entries(entries).map(([code, entry]) => problemText(code, entry as unknown as Entry, broken)),
      ),
    ),
  );
}

/** An entry with what it needs to word itself; the data is that of its own example. */
type Entry = CatalogueEntry<unknown>;

function problemText(code: string, { severity, says, fix, example }: Entry, broken: readonly Broken[]): string {
  const heading = `#### ${code}`;
  const shown = showing(code, broken);
  if (shown) return parts(heading, block("yaml", visible(shown.document)), block("text", shown.printed));
  if (example === undefined) return parts(heading, `(${severity})`);
  const sign = severity === "warning" ? "warning " : "";
  const way = typeof fix === "string" ? fix : fix(example);
  return parts(heading, block("text", `${sign}${code}: ${says(example)}\n  fix: ${way}`));
}

/** Characters that no text editor shows, as escapes: the page is to stay a text. */
const visible = (text: string): string =>
  text.replace(/[^\P{Cc}\t\n]/gu, (c) => `\\x${(c.codePointAt(0) ?? 0).toString(16).padStart(2, "0")}`);

/** The broken document named by the code, else by the code and a word more; it must show the code. */
export function showing(code: string, broken: readonly Broken[]): Broken | undefined {
  const shows = broken.filter((b) => b.printed.split("\n").some((line) => line.includes(` ${code}: `)));
  return shows.find((b) => b.file === `${code}.yaml`) ?? shows.find((b) => b.file.startsWith(`${code}-`));
}
