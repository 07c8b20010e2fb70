import { type Command, Option } from "commander";
import { command } from "./command.js";
import type { Stage } from "./stage.js";

/** The tools for a library of models, by name. */
export const libraryCommandNames = ["tidy", "diff", "verify", "equations"] as const;

/** Adds the tools for a library of models: documents in order, told apart, tested, and written out for a reviewer. */
export function addLibraryCommands(root: Command, { perform, inputs, io }: Stage): void {
  command(root, "tidy <files...>", "put documents in canonical order and spacing, comments kept", [
    "tidy --check networks/demo/bypass.yaml",
  ])
    .option("--check", "write nothing; exit 1 where a file is not tidy")
    .action((files: string[], options) =>
      perform("tidy", async () => (await import("./tidy.js")).tidyFiles(files, options, { inputs, io })),
    );
  command(root, "diff <before> <after>", "what changed in meaning between two documents of a kind", [
    "diff networks/demo/corner.yaml networks/demo/both.yaml",
  ]).action((before: string, after: string) =>
    perform("diff", async () => (await import("./diff.js")).diff(before, after, { inputs, io })),
  );
  command(root, "verify <folder>", "check every document under a folder and run the networks' `checks:`", [
    "verify networks/demo",
  ])
    .addOption(new Option("--format <form>", "how to print").choices(["text", "json", "junit"]).default("text"))
    .action((folder: string, options) =>
      perform("verify", async () => (await import("./verify.js")).verify(folder, options, { inputs, io })),
    );
  command(root, "equations <network>", "the compiled balances as Markdown with math, each term with its line", [
    "equations networks/demo/both.yaml",
  ])
    .option("-o, --output <file>", "write to F.md; else to standard output")
    .action((network: string, options) =>
      perform("equations", async () => (await import("./equations.js")).equations(network, options, { inputs, io })),
    );
}
