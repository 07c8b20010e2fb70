import { readdirSync, readFileSync } from "node:fs";
import type { ExitStatus, Io } from "../../src/cli/io.js";
import { run } from "../../src/cli/run.js";

const root = new URL("../../", import.meta.url);

/** What a command did to the world. */
export interface Ran {
  readonly status: ExitStatus;
  readonly out: string;
  readonly err: string;
  readonly written: ReadonlyMap<string, string>;
}

export interface Surroundings {
  /** Files by path, before those of the repository; `-` is standard input; undefined: not there. */
  readonly files?: Readonly<Record<string, string | Uint8Array | undefined>>;
  readonly isTerminal?: boolean;
  /** Is standard output a terminal that wants colour? */
  readonly colour?: boolean;
  readonly cancelled?: () => boolean;
}

/** Runs a command line in this process, in the root of the repository, writing nothing. */
export async function backmix(
  args: readonly string[],
  { files = {}, isTerminal = false, colour = false, cancelled }: Surroundings = {},
): Promise<Ran> {
  let out = "";
  let err = "";
  const written = new Map<string, string>();
  const read: Io["read"] = (path) => {
    if (path in files) return files[path];
    try {
      return readFileSync(new URL(path, root));
    } catch {
      return undefined;
    }
  };
  const status = await run(args, {
    read,
    obstacle: () => undefined,
    list: (path) => listed(path, files),
    write: (path, content) => void written.set(path, typeof content === "string" ? content : latin1(content)),
    makeFolder: () => {},
    out: (text) => {
      out += text;
    },
    err: (text) => {
      err += text;
    },
    isTerminal,
    colour: { out: colour, err: false },
    cancelled: cancelled ?? (() => false),
  });
  return { status, out, err, written };
}

/** One character per byte. */
const latin1 = (bytes: Uint8Array): string => Buffer.from(bytes).toString("latin1");

/** Files of the surroundings by their paths; else a folder of the repository. */
function listed(path: string, files: NonNullable<Surroundings["files"]>): ReturnType<Io["list"]> {
  const inside = Object.keys(files).flatMap((f) => (f.startsWith(`${path}/`) ? [f.slice(path.length + 1)] : []));
  if (inside.length > 0) {
    const folders = new Set(inside.flatMap((f) => (f.includes("/") ? [f.slice(0, f.indexOf("/"))] : [])));
    const own = inside.filter((f) => !f.includes("/"));
    return [
      ...own.map((name) => ({ name, is: "file" as const })),
      ...[...folders].map((name) => ({ name, is: "folder" as const })),
    ];
  }
  try {
    return readdirSync(new URL(path, root), { withFileTypes: true }).map((e) => ({
      name: e.name,
      is: e.isDirectory() ? "folder" : "file",
    }));
  } catch {
    return undefined;
  }
}

/** The same with `--json`: one document, nothing else on standard output. */
export async function json(
  args: readonly string[],
  surroundings?: Surroundings,
): Promise<{ status: ExitStatus; document: Json }> {
  const { status, out } = await backmix([...args, "--json"], surroundings);
  return { status, document: JSON.parse(out) };
}

/** A parsed document, to be looked into by path. */
export type Json = { readonly [key: string]: Json } & { readonly [index: number]: Json };

/** A value in a document by its path: `readings.0.mean.value`. */
export function at(document: unknown, path: string): unknown {
  let here = document;
  for (const key of path.split(".")) here = (here as Record<string, unknown> | null | undefined)?.[key];
  return here;
}
