import { problemJson } from "../json.js";
import type { Problem } from "../problem.js";

/** Problems as workflow commands of GitHub Actions, one a line, which shows each beside its line of a pull request. */
export const githubAnnotations = (problems: readonly Problem[]): string => problems.map(annotation).join("\n");

function annotation(problem: Problem): string {
  const { severity, file, line, column, endLine, endColumn, code, message, fix, usedBy = [] } = problemJson(problem);
  const where = [`file=${property(file)}`, `line=${line}`, `endLine=${endLine}`];
  const columns = line === endLine ? [`col=${column}`, `endColumn=${endColumn}`] : [];
  const chain = usedBy.map(
    (use) => `\n${use.as === "part" ? "used by" : "base of"} ${use.file}:${use.line}:${use.column}`,
  );
  const says = data(`${message}; fix: ${fix}${chain.join("")}`);
  return `::${severity} ${[...where, ...columns, `title=${property(code)}`].join(",")}::${says}`;
}

const data = (text: string): string => text.replace(/%/g, "%25").replace(/\r/g, "%0D").replace(/\n/g, "%0A");

const property = (text: string): string => data(text).replace(/:/g, "%3A").replace(/,/g, "%2C");
