import type { Parsed, ParseOptions, Read } from "../parse/parsed.js";
import type { Problem } from "../problems/problem.js";
import { hasErrors, problem } from "../problems/report.js";
import { decodeText } from "../read/decode.js";
import { largestDocument } from "../read/files.js";
import type { Span } from "../text/source.js";
import type { Io } from "./io.js";
import { InputError } from "./outcome.js";

/** Reads each file once, remembers what a run rests on, and gathers warnings about it. */
export class Inputs {
  readonly warnings: Problem[] = [];
  /** May parts and bases lie outside the library? */
  allowOutside = false;
  private readonly contents = new Map<string, string | Uint8Array | undefined>();

  constructor(private readonly io: Pick<Io, "read" | "exists" | "real" | "size" | "library">) {}

  readonly read: Read = (path) => {
    if (!this.contents.has(path)) this.contents.set(path, this.io.read(path));
    return this.contents.get(path);
  };

  /** How a document on the command line is read, and what it names. */
  options(path: string): ParseOptions & { readonly path: string } {
    const { real, size, library } = this.io;
    return {
      path,
      read: this.read,
      allowOutside: this.allowOutside,
      ...(real ? { real } : {}),
      ...(size ? { size } : {}),
      ...(library ? { root: library(path) } : {}),
    };
  }

  /** Text of a file named on the command line, or the reason why there is none. */
  text(path: string): string | Problem {
    const size = this.io.size?.(path) ?? 0;
    if (size > largestDocument) return problem("file-too-large", at(path), { megabytes: Math.ceil(size / 1024 ** 2) });
    const content = this.read(path);
    if (content !== undefined) return decodeText(content);
    return this.io.exists(path)
      ? onFile(path, "file-unreadable", `'${path}' cannot be read`, "name a file, not a folder, that may be read")
      : onFile(
          path,
          "file-missing",
          `there is no file '${path}'`,
          "correct the path; it is relative to the current folder",
        );
  }

  /**
   * A document by its path.
   * @throws InputError with all problems, where there is none
   */
  document<T>(path: string, parse: (text: string, options: ParseOptions) => Parsed<T>): T {
    const text = this.text(path);
    if (typeof text !== "string") throw new InputError([text]);
    const { document, problems } = parse(text, this.options(path));
    if (document === undefined) throw new InputError(problems);
    this.warnings.push(...problems);
    return document;
  }

  /** Keeps warnings, throws on errors. */
  accept(problems: readonly Problem[]): void {
    if (hasErrors(problems)) throw new InputError(problems);
    this.warnings.push(...problems);
  }

  /** Every file that was read, with its SHA-256, in the order read. */
  async list(): Promise<{ path: string; sha256: string }[]> {
    const { createHash } = await import("node:crypto");
    return [...this.contents].flatMap(([path, content]) =>
      content === undefined ? [] : [{ path, sha256: createHash("sha256").update(content).digest("hex") }],
    );
  }
}

/** A problem with a file as a whole, which has no line to show. */
const onFile = (path: string, code: string, message: string, fix: string): Problem => ({
  code,
  severity: "error",
  message,
  fix,
  at: at(path),
});

const at = (path: string): Span => ({ source: { path, text: "" }, from: 0, to: 0 });
