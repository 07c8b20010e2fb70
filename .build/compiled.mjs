// Runs commands in one process and writes down the code that V8 compiled for them, chunk by chunk: folder of the program, commands.
import { writeFileSync } from "node:fs";
import { createRequire } from "node:module";
import { join } from "node:path";
import { setFlagsFromString } from "node:v8";

const [dist, commands] = process.argv.slice(2);
// Code that is not asked for in a while is dropped otherwise.
setFlagsFromString("--no-flush-bytecode");
const { load, chunks, codeBeside } = createRequire(import.meta.url)(join(dist, "load.cjs"));
const of = (name) => load(join(dist, "chunks", `${name}.cjs`));
const { run } = of("run");
const io = {
  ...of("io").files(process.cwd()),
  isTerminal: false,
  colour: { out: false, err: false },
  out() {},
  err() {},
  cancelled: () => false,
};
for (const args of JSON.parse(commands)) {
  const status = await run(args, io);
  if (status !== 0) throw new Error(`backmix ${args.join(" ")}: exit status ${status}`);
}
// V8 takes code only under the flags that it was made under.
setFlagsFromString("--flush-bytecode");
for (const { path, script } of chunks.values()) writeFileSync(codeBeside(path), script.createCachedData());
