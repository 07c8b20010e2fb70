import type { Report } from "../problems/report.js";
import type { Span } from "../text/source.js";
import { decodeText } from "./decode.js";
import { type Files, largestDocument, largestTable } from "./files.js";

const megabyte = 1024 * 1024;

/** How a file is named, and where. */
export interface NamedAs {
  readonly text: string;
  readonly at: Span;
}

type Reach = Pick<Files, "read" | "size" | "obstacle">;

/**
 * The text of a document by its path; one that is too large is not even read.
 * @returns undefined where there is none; reported
 */
export function openText(file: string, as: NamedAs, files: Reach, report: Report): string | undefined {
  const size = files.size?.(file) ?? 0;
  if (size > largestDocument) {
    report("file-too-large", as.at, { bytes: size });
    return undefined;
  }
  const content = contentOf(file, as, files, report);
  return content === undefined ? undefined : decodeText(content);
}

/**
 * The content of a table by its path; one that is too large is not even read.
 * @returns undefined where there is none; reported
 */
export function openTable(file: string, as: NamedAs, files: Reach, report: Report): string | Uint8Array | undefined {
  const known = files.size?.(file) ?? 0;
  const content = known > largestTable ? undefined : contentOf(file, as, files, report);
  const size = Math.max(known, content?.length ?? 0);
  if (size <= largestTable) return content;
  const at = { source: { path: file, text: "" }, from: 0, to: 0 };
  report("table-too-large", at, { file, megabytes: Math.ceil(size / megabyte) });
  return undefined;
}

function contentOf(file: string, as: NamedAs, files: Reach, report: Report): string | Uint8Array | undefined {
  const why = files.obstacle?.(file);
  const content = why ? undefined : files.read(file);
  if (content !== undefined) return content;
  if (why) report("file-unreadable", as.at, { file: as.text, why });
  else report("file-missing", as.at, { file: as.text });
  return undefined;
}
