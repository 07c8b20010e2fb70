import type { Parsed, ParseOptions, Read } from "../parse/parsed.js";
import type { Obstacle } from "../problems/obstacle.js";
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

  constructor(private readonly io: Pick<Io, "read" | "obstacle" | "real" | "size" | "library">) {}

  /** What a document names: files, no streams. */
  readonly read: Read = (path) => {
    if (!this.contents.has(path)) this.contents.set(path, this.obstacle(path) ? undefined : this.io.read(path));
    return this.contents.get(path);
  };

  private readonly obstacle = (path: string): Obstacle | undefined =>
    // Standard input is on the command line or nowhere.
    path === "-" ? "device" : this.io.obstacle(path);

  /** How a document on the command line is read, and what it names. */
  options(path: string): ParseOptions & { readonly path: string } {
    const { real, size, library } = this.io;
    return {
      path,
      read: this.read,
      obstacle: this.obstacle,
      allowOutside: this.allowOutside,
      ...(real ? { real } : {}),
      ...(size ? { size } : {}),
      ...(library ? { root: library(path) } : {}),
    };
  }

  /** Text of a file or stream named on the command line, or the reason why there is none. */
  text(path: string): string | Problem {
    const size = this.io.size?.(path) ?? 0;
    if (size > largestDocument) return problem("file-too-large", at(path), { bytes: size });
    if (!this.contents.has(path)) this.contents.set(path, this.io.read(path, largestDocument));
    const content = this.contents.get(path);
    if (content !== undefined && content.length > largestDocument) {
      // A stream was read no further.
      return problem("file-too-large", at(path), { bytes: content.length, orMore: true });
    }
    if (content !== undefined) return decodeText(content);
    const why = this.io.obstacle(path);
    return why ? problem("file-unreadable", at(path), { file: path, why }) : missing(path);
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

  /** What every path that was asked for holds. */
  get all(): ReadonlyMap<string, string | Uint8Array | undefined> {
    return this.contents;
  }

  /** Every path that was asked for, also where nothing is. */
  get paths(): readonly string[] {
    return [...this.contents.keys()];
  }

  /** Every file that was read, with its SHA-256, in the order read. */
  async list(): Promise<{ path: string; sha256: string }[]> {
    const { createHash } = await import("node:crypto");
    return [...this.contents].flatMap(([path, content]) =>
      content === undefined ? [] : [{ path, sha256: createHash("sha256").update(content).digest("hex") }],
    );
  }
}

/** A file as a whole has no line to show. */
const missing = (path: string): Problem => ({
  code: "file-missing",
  severity: "error",
  message: `there is no file '${path}'`,
  fix: "correct the path; it is relative to the current folder",
  at: at(path),
});

const at = (path: string): Span => ({ source: { path, text: "" }, from: 0, to: 0 });
