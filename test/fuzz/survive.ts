import { run } from "../../src/cli/run.js";
import type { Input } from "./input.js";

type Files = ReadonlyMap<string, Uint8Array>;

/** Commands that look at a file, by what it holds. A table is looked at through the document that names it. */
function commandsFor(path: string, corpus: Files): string[][] {
  if (path.endsWith(".csv")) {
    const name = path.slice(path.lastIndexOf("/") + 1);
    const trial = [...corpus].find(
      ([p, bytes]) => p.endsWith(".yaml") && new TextDecoder().decode(bytes).includes(name),
    );
    return trial
      ? [
          ["check", trial[0]],
          ["moments", trial[0]],
        ]
      : [];
  }
  return [
    ["check", path],
    ["check", path, "--format", "sarif"],
    ["tidy", "--check", path],
    ["draw", path],
    ["moments", path],
  ];
}

/** What is wrong with how the program took an input; undefined where it took it well. */
export async function faultOf(
  { path, bytes }: Input,
  corpus: Files,
  commands = commandsFor(path, corpus),
): Promise<string | undefined> {
  for (const args of commands) {
    let said = "";
    const read = (file: string): Uint8Array | undefined => (file === path ? bytes : corpus.get(file));
    const io = {
      read,
      obstacle: () => undefined,
      list: () => undefined,
      makeFolder: () => undefined,
      write: (file: string) => {
        said += `wrote ${file}\n`;
      },
      out: (text: string) => {
        said += text;
      },
      err: (text: string) => {
        said += text;
      },
      isTerminal: false,
      colour: { out: false, err: false },
      cancelled: () => false,
    };
    const status = await run(args, io);
    const wrong = wrongIn(said, status);
    if (wrong) return `${args.join(" ")}: ${wrong}`;
  }
  return undefined;
}

function wrongIn(said: string, status: number): string | undefined {
  const fault = /this is a fault of backmix[^\n]*/.exec(said);
  if (fault) return fault[0];
  const stack = /\n\s+at \S.*:\d+:\d+\)?/.exec(said);
  if (stack) return `a stack trace: ${stack[0].trim()}`;
  if (said.includes("[object ")) return "an object printed as a word";
  if (status === 1 && said.trim() === "") return "status 1 and not a word why";
  return undefined;
}
