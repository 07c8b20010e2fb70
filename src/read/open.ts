import type { Report } from "../problems/report.js";
import type { Span } from "../text/source.js";
import { decodeText } from "./decode.js";
import { type Files, largestDocument } from "./files.js";

const megabyte = 1024 * 1024;

/**
 * The text of a document by its path; one that is too large is not even read.
 * @param as how it is named, and where
 * @returns undefined where there is none; reported
 */
export function openText(
  file: string,
  as: { readonly text: string; readonly at: Span },
  files: Pick<Files, "read" | "size">,
  report: Report,
): string | undefined {
  const size = files.size?.(file) ?? 0;
  if (size > largestDocument) {
    report("file-too-large", as.at, { megabytes: Math.ceil(size / megabyte) });
    return undefined;
  }
  const content = files.read(file);
  if (content !== undefined) return decodeText(content);
  report("file-missing", as.at, { file: as.text });
  return undefined;
}
