import { readFileSync } from "node:fs";
import { createRequire } from "node:module";
import { dirname, join } from "node:path";
import { Script } from "node:vm";

/** A chunk of the built program, its compiled form kept for who writes it down. */
export interface Chunk {
  readonly path: string;
  readonly script: Script;
  readonly exports: Record<string, unknown>;
}

/** Every chunk that is loaded, by path. */
export const chunks = new Map<string, Chunk>();

const native = createRequire(join(__dirname, "load.cjs"));

/**
 * Loads a chunk of the built program as Node's own `require` would, with the compiled code that the build left beside it: compiling
 * is most of what a short command takes. Code that another Node left is passed over by V8, and compiled anew.
 * @param path  from the root of the machine
 */
export function load(path: string): Record<string, unknown> {
  const known = chunks.get(path);
  if (known) return known.exports;
  // Chunks are plain ASCII, which this reads fastest.
  const source = readFileSync(path, "latin1");
  const cachedData = compiledCode(path);
  const script = new Script(`(function(exports,require,module,__filename,__dirname){${source}\n})`, {
    filename: path,
    ...(cachedData ? { cachedData } : {}),
  });
  const module: { exports: Record<string, unknown> } = { exports: {} };
  const folder = dirname(path);
  const require = (name: string): unknown => (name.startsWith(".") ? load(join(folder, name)) : native(name));
  script.runInThisContext()(module.exports, require, module, path, folder);
  chunks.set(path, { path, script, exports: module.exports });
  return module.exports;
}

/** Where the compiled code of a chunk lies. */
export const codeBeside = (path: string): string => `${path}.code`;

function compiledCode(path: string): Buffer | undefined {
  try {
    return readFileSync(codeBeside(path));
  } catch {
    return undefined;
  }
}
