import { resolve } from "node:path";
import { hasErrors } from "../../problems/report.js";
import { type LastGood, livePage, liveSection, picturesOf } from "../../report/live/page.js";
import { type LiveView, liveView } from "../../report/live/view.js";
import { Inputs } from "../inputs.js";
import type { Io } from "../io.js";
import { Folders } from "./folders.js";
import { type LiveServer, serve } from "./server.js";

/** A running watch. */
export interface Watching {
  readonly url: string;
  close(): Promise<void>;
}

/** One file on the page. */
interface Watched {
  readonly path: string;
  /** Paths at which something was when it was drawn last. */
  found: ReadonlySet<string>;
  /** Absolute paths of all that its picture rests on. */
  restsOn: ReadonlySet<string>;
  html: string;
  good: LastGood | undefined;
  waiting: NodeJS.Timeout | undefined;
}

/** An editor writes in several steps; what follows within this is one save, ms. */
const settle = 20;
/** While a file is being replaced there is none for a moment: so often and so long it is waited for, ms. */
const missingTries = 8;
const missingWait = 25;

export interface WatchingOptions {
  /** Folder that paths are relative to. */
  readonly cwd: string;
  /** 0 for any that is free. */
  readonly port: number;
  readonly allowOutside: boolean;
  readonly clock: () => Date;
}

/** Serves a page with the pictures and problems of the files, drawn anew whenever one of the files they rest on is saved. */
export async function startWatching(
  paths: readonly string[],
  io: Pick<Io, "read" | "obstacle" | "real" | "size" | "library">,
  options: WatchingOptions,
): Promise<Watching> {
  const files = paths.map(
    (path): Watched => ({ path, found: new Set(), restsOn: new Set(), html: "", good: undefined, waiting: undefined }),
  );
  let server: LiveServer | undefined;
  const absolute = (path: string): string => resolve(options.cwd, path);
  const folders = new Folders((changed) => {
    for (const file of files) if (file.restsOn.has(changed)) later(file, settle, missingTries);
  });

  const later = (file: Watched, wait: number, tries: number): void => {
    clearTimeout(file.waiting);
    file.waiting = setTimeout(() => draw(file, tries), wait);
  };

  const draw = (file: Watched, tries: number): void => {
    const inputs = new Inputs(io);
    inputs.allowOutside = options.allowOutside;
    const view = viewOf(file.path, inputs, paths);
    const found = new Set([file.path, ...inputs.paths].filter((p) => inputs.read(p) !== undefined));
    if (tries > 0 && [...file.found].some((p) => inputs.paths.includes(p) && !found.has(p))) {
      later(file, missingWait, tries - 1);
      return;
    }
    file.found = found;
    const at = clockWords(options.clock());
    if (!hasErrors(view.problems)) file.good = { pictures: picturesOf(view, file.path), title: view.title, at };
    file.html = liveSection(view, file.path, file.good, at);
    const rest = [file.path, ...inputs.paths].filter((p) => p !== "-");
    // A link is followed to what is edited.
    file.restsOn = new Set(rest.flatMap((p) => [absolute(p), ...(io.real ? [io.real(p)] : [])]));
    folders.follow(files.flatMap((f) => [...f.restsOn]));
    server?.send(message(file));
  };

  const message = (file: Watched): string => JSON.stringify({ file: files.indexOf(file), html: file.html });
  for (const file of files) draw(file, 0);
  try {
    server = await serve(
      () => livePage(paths),
      () => files.map(message),
      options.port,
    );
  } catch (e) {
    folders.close();
    throw e;
  }
  const { url, close } = server;
  return {
    url,
    close: async () => {
      for (const file of files) clearTimeout(file.waiting);
      folders.close();
      await close();
    },
  };
}

function viewOf(path: string, inputs: Inputs, beside: readonly string[]): LiveView {
  const text = inputs.text(path);
  if (typeof text === "string") return liveView(text, { ...inputs.options(path), beside });
  return { kind: undefined, title: path, figures: [], problems: [text] };
}

const clockWords = (at: Date): string =>
  [at.getHours(), at.getMinutes(), at.getSeconds()].map((n) => String(n).padStart(2, "0")).join(":");
