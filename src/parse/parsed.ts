import type { Obstacle } from "../problems/obstacle.js";
import type { Problem } from "../problems/problem.js";
import { collector, hasErrors, type Report } from "../problems/report.js";
import { type Files, usualRoot } from "../read/files.js";
import { checkShape, documentKind } from "../read/shape.js";
import { child, type MapNode } from "../read/tree.js";
import { readYaml } from "../read/yaml.js";
import { wholeDocument } from "../resolve/based-on.js";
import type { DocumentKind } from "../schema/shape.js";
import type { Span } from "../text/source.js";

/** Gives the content of a file by its path, or undefined where there is none. Synchronous; the core reads no files itself. */
export type Read = (path: string) => string | Uint8Array | undefined;

export interface ParseOptions {
  /** Where the text comes from, for messages and as the place that relative paths start from. */
  readonly path?: string;
  readonly read?: Read;
  /**
   * The folder that parts (`use`) and bases (`based-on`) may not leave. Where it is not given: the current folder, or
   * that of the document where it lies elsewhere.
   */
  readonly root?: string;
  /** Parts and bases may come from anywhere. */
  readonly allowOutside?: boolean;
  /** The path that a path really leads to, links followed: what counts for `root` and for circles. */
  readonly real?: (path: string) => string;
  /** Bytes of a file, where they can be told without reading it: too large a document is not read at all. */
  readonly size?: (path: string) => number | undefined;
  /** Why what is at a path cannot be read, where something is there. */
  readonly obstacle?: (path: string) => Obstacle | undefined;
}

/** How a document reaches the files that it names. */
export function filesOf(path: string, options: ParseOptions): Files {
  const { read = nothingToRead, root, allowOutside, real, size, obstacle } = options;
  return { read, root: allowOutside ? undefined : (root ?? usualRoot(path)), real, size, obstacle };
}

/** The tree of a text, read once for who must tell first what document it is. */
export interface Reading {
  readonly tree: MapNode | undefined;
  readonly problems: readonly Problem[];
}

export function readDocument(text: string, path: string): Reading {
  const { report, problems } = collector();
  return { tree: readYaml({ path, text }, report), problems };
}

/** A document, or the reasons why there is none. Warnings may stand beside a document. */
export interface Parsed<T> {
  readonly document: T | undefined;
  readonly problems: Problem[];
}

/** What a tree means, variants merged; `adopt` takes over the problems of documents that it names. */
export type Meaning<T> = (
  tree: MapNode,
  report: Report,
  adopt: (problems: readonly Problem[]) => void,
) => T | undefined;

/** What is asked of a document beside its own meaning, whether it has errors or not. */
export type Held<T> = (document: T, ...to: [report: Report, adopt: (problems: readonly Problem[]) => void]) => void;

/**
 * text -> tree -> shape -> meaning; the same for all five documents.
 * @param meaning runs only on a tree whose shape is right; what it gives counts only where no error was reported
 * @param glance  finds what else is wrong in a tree whose shape is not right; must bear any tree
 */
export function parseDocument<T>(
  kind: DocumentKind,
  text: string | Reading,
  options: ParseOptions & { readonly path: string },
  meaning: Meaning<T>,
  glance: (tree: MapNode, told: readonly Problem[]) => readonly Problem[] = (tree) => glanceBy(meaning, tree),
): Parsed<T> {
  const { report, problems } = collector();
  const reading = typeof text === "string" ? readDocument(text, options.path) : text;
  const { tree } = reading;
  problems.push(...reading.problems);
  let document: T | undefined;
  if (tree && checkShape(tree, kind, report)) {
    const whole = wholeDocument(tree, kind, filesOf(options.path, options), report);
    document = whole && meaning(whole, report, (more) => problems.push(...more));
  } else if (tree && documentKind(tree) === kind) {
    // What stands at a place that is already found fault with is an echo.
    problems.push(
      ...glance(tree, [...problems]).filter((p) => !problems.some((q) => overlap(p.at, q.at) || isEmptyValue(p.at, q))),
    );
  }
  return { document: hasErrors(problems) ? undefined : document, problems: inOrder(distinct(problems)) };
}

/** By the same meaning, whose result nobody wants. */
function glanceBy<T>(meaning: Meaning<T>, tree: MapNode): Problem[] {
  if (child(tree, "based-on") || child(tree, "change")) return []; // a variant that is none says too little by itself
  const { report, problems } = collector();
  meaning(tree, report, (more) => problems.push(...more));
  return problems;
}

/** What several rivals or parts share is told once. */
function distinct(problems: readonly Problem[]): Problem[] {
  const seen = new Set<string>();
  return problems.filter(({ code, message, at }) => {
    const key = `${at.source.path}:${at.from}:${at.to}:${code}:${message}`;
    return !seen.has(key) && seen.add(key);
  });
}

const overlap = (a: Span, b: Span): boolean => a.source.path === b.source.path && a.from < b.to && b.from < a.to;

/** Is a place the value that a key was found not to have: `~` of `volume: ~`? */
const isEmptyValue = ({ source, from }: Span, { code, at: key }: Problem): boolean =>
  code === "empty-value" &&
  source.path === key.source.path &&
  from >= key.to &&
  /^\s*:\s*$/.test(source.text.slice(key.to, from));

/** File by file in the order first met, each in the order of its lines. */
function inOrder(problems: readonly Problem[]): Problem[] {
  const files = [...new Set(problems.map((p) => p.at.source.path))];
  return [...problems].sort(
    (a, b) => files.indexOf(a.at.source.path) - files.indexOf(b.at.source.path) || a.at.from - b.at.from,
  );
}

export const nothingToRead: Read = () => undefined;
