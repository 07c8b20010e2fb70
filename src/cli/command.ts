import type { Command } from "commander";

/** A command with what every command has: `--json`, and examples that a test runs. */
export function command(root: Command, usage: string, says: string, examples: readonly string[]): Command {
  const lines = examples.map((e) => `  backmix ${e}`).join("\n");
  return root
    .command(usage)
    .description(says)
    .option("--json", "print one JSON document")
    .addHelpText("after", `\nExample${examples.length > 1 ? "s" : ""}:\n${lines}`);
}
