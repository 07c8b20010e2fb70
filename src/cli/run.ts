import { CommanderError } from "commander";
import { problemJson } from "../problems/json.js";
import { printProblems } from "../problems/print.js";
import type { Problem } from "../problems/problem.js";
import { RefusedError } from "../problems/refused.js";
import { Inputs } from "./inputs.js";
import type { ExitStatus, Io } from "./io.js";
import { InputError, type Outcome, UsageError } from "./outcome.js";
import { commandNames, program } from "./program.js";
import { version } from "./version.js";

/** Says that the program itself is at fault, in the form that the command line asks for. */
export function tellFault(e: unknown, args: readonly string[], io: Io): Promise<ExitStatus> {
  return tell(fault(e), commandIn(args) ?? "backmix", args, new Inputs(io), io);
}

async function tell(
  outcome: Outcome,
  command: string,
  args: readonly string[],
  inputs: Inputs,
  io: Io,
): Promise<ExitStatus> {
  if (asksForJson(args)) io.out(`${JSON.stringify(await document(command, inputs, outcome))}\n`);
  else printForPeople(outcome, inputs.warnings, io);
  return outcome.status;
}

/**
 * Runs one command line.
 * @param args  without the names of the interpreter and the script
 * @returns the exit status; everything else goes through `io`. Never throws.
 */
export async function run(args: readonly string[], io: Io): Promise<ExitStatus> {
  const inputs = new Inputs(io);
  let command = commandIn(args) ?? "backmix";
  const finish = (outcome: Outcome): Promise<ExitStatus> => tell(outcome, command, args, inputs, io);
  let said = "";
  const hear = (text: string): void => {
    said += text;
  };
  try {
    let outcome: Outcome = { status: 0, text: "", json: {} };
    const perform = async (name: string, work: () => Outcome | Promise<Outcome>): Promise<void> => {
      command = name;
      outcome = await work();
    };
    await program({ io, inputs, perform, write: hear, width: 100 }).parseAsync([...args], { from: "user" });
    return await finish(outcome);
  } catch (e) {
    return finish(outcomeOf(e, said, args));
  }
}

const commandIn = (args: readonly string[]): string | undefined => args.find((a) => !a.startsWith("-"));

const asksForJson = (args: readonly string[]): boolean => {
  const end = args.indexOf("--");
  const flags = end < 0 ? args : args.slice(0, end);
  return (
    flags.includes("--json") ||
    flags.some((a, i) => a === "--format=json" || (a === "--format" && flags[i + 1] === "json"))
  );
};

async function document(command: string, inputs: Inputs, { json, problems }: Outcome): Promise<object> {
  const found = [...inputs.warnings, ...(problems ?? [])].map(problemJson);
  return {
    backmix: version,
    command,
    inputs: await inputs.list(),
    ...json,
    ...("problems" in json ? {} : { problems: found }),
  };
}

function printForPeople({ text, problems = [], notes = [] }: Outcome, warnings: readonly Problem[], io: Io): void {
  if (text !== "") io.out(text.endsWith("\n") ? text : `${text}\n`);
  const all = [...warnings, ...problems];
  const after = [...(all.length > 0 ? [printProblems(all, { colour: io.colour.err })] : []), ...notes];
  if (after.length > 0) io.err(`${after.join("\n")}\n`);
}

/** Nothing is wrong with the input, but the engine asked for would not come to an end. */
const outOfReach: ReadonlySet<string> = new Set(["loop-too-short"]);

function outcomeOf(e: unknown, said: string, args: readonly string[]): Outcome {
  if (e instanceof InputError || e instanceof RefusedError)
    return {
      status: e.problems.some((p) => outOfReach.has(p.code)) ? 3 : 1,
      text: "",
      json: { ok: false },
      problems: e.problems,
    };
  if (e instanceof UsageError) return wrongUsage(e.message, args);
  if (e instanceof CommanderError) {
    if (e.exitCode === 0) return { status: 0, text: said, json: { text: said.trimEnd() } };
    if (e.code === "commander.help") return wrongUsage("name a command", args, said);
    return wrongUsage(e.message.replace(/^error: /, ""), args);
  }
  return fault(e);
}

function wrongUsage(message: string, args: readonly string[], help?: string): Outcome {
  const command = commandIn(args);
  const known = command !== undefined && commandNames.has(command);
  const hint = help ?? `see: backmix ${known ? `${command} ` : ""}--help`;
  const notes = help === undefined ? [`backmix: ${message}`, hint] : [hint.trimEnd()];
  return { status: 2, text: "", json: { ok: false, error: { kind: "usage", message } }, notes };
}

/** What no input should bring about. The message may help to find it, a stack trace helps nobody who uses the program. */
function fault(e: unknown): Outcome {
  const message = e instanceof Error ? e.message : String(e);
  const notes = [
    `backmix: this is a fault of backmix, not of your file: ${message}`,
    `Please report it with the command, the files and this version (${version}).`,
  ];
  return { status: 3, text: "", json: { ok: false, error: { kind: "fault", message } }, notes };
}
