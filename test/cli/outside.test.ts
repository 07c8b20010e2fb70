import { mkdirSync, mkdtempSync, rmSync, symlinkSync, truncateSync, writeFileSync } from "node:fs";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { afterAll, beforeAll, expect, test } from "vitest";
import { files, type Io } from "../../src/cli/io.js";
import { run } from "../../src/cli/run.js";

// Real files and links: what a path leads to is the machine's to say.
const root = mkdtempSync(join(tmpdir(), "backmix-library-"));
const tank = `network: Tank
format: 1
feeds: {feed: {flow: 1 L/min, to: tank}}
compartments: {tank: {kind: stirred, volume: 10 L, to: out}}
outlets: [out]
`;
const around = (use: string) => tank.replace("{kind: stirred, volume: 10 L,", `{kind: part, use: ${use},`);
const variant = (base: string) =>
  `network: Variant\nformat: 1\nbased-on: ${base}\nchange: {compartments: {tank: {volume: 20 L}}}\n`;

beforeAll(() => {
  for (const folder of ["lib/vessels", "lib/parts", "elsewhere", "kept/.git", "kept/vessels"]) {
    mkdirSync(join(root, folder), { recursive: true });
  }
  const write = (path: string, text: string) => writeFileSync(join(root, path), text);
  write("elsewhere/tank.yaml", tank);
  write("lib/parts/tank.yaml", tank);
  write("lib/vessels/inside.yaml", around("../parts/tank.yaml"));
  write("lib/vessels/outside.yaml", around("../../elsewhere/tank.yaml"));
  write("lib/vessels/based.yaml", variant("../../elsewhere/tank.yaml"));
  write("lib/vessels/absolute.yaml", around(join(root, "elsewhere/tank.yaml")));
  write("lib/vessels/linked.yaml", around("../parts/link.yaml"));
  symlinkSync(join(root, "elsewhere/tank.yaml"), join(root, "lib/parts/link.yaml"));
  write("lib/parts/circle.yaml", around("again.yaml"));
  symlinkSync(join(root, "lib/parts/circle.yaml"), join(root, "lib/parts/again.yaml"));
  write("lib/parts/deeper.yaml", around("more/deeper.yaml"));
  symlinkSync(join(root, "lib/parts"), join(root, "lib/parts/more"));
  write("lib/parts/huge.yaml", "");
  truncateSync(join(root, "lib/parts/huge.yaml"), 20 * 1024 * 1024);
  write("lib/vessels/huge.yaml", around("../parts/huge.yaml"));
  write("kept/vessels/tank.yaml", around("../tank.yaml"));
  write("kept/tank.yaml", tank);
});

afterAll(() => rmSync(root, { recursive: true, force: true }));

async function codes(folder: string, ...args: readonly string[]): Promise<string[]> {
  let out = "";
  const io: Io = {
    ...files(join(root, folder)),
    out: (text) => {
      out += text;
    },
    err: () => {},
    isTerminal: false,
    colour: { out: false, err: false },
    cancelled: () => false,
  };
  const status = await run(["check", "--json", ...args], io);
  const { problems, error } = JSON.parse(out) as { problems: { code: string }[]; error?: { message: string } };
  expect(error).toBeUndefined();
  expect(status).toBe(problems.length > 0 ? 1 : 0);
  return problems.map((p) => p.code);
}

test.each([
  ["a part in the library", "lib", ["vessels/inside.yaml"], []],
  ["a part outside of it", "lib", ["vessels/outside.yaml"], ["outside-library"]],
  ["a base outside of it", "lib", ["vessels/based.yaml"], ["outside-library"]],
  ["an absolute path", "lib", ["vessels/absolute.yaml"], ["outside-library"]],
  ["a link out of it", "lib", ["vessels/linked.yaml"], ["outside-library"]],
  [
    "all of them where that is allowed",
    "lib",
    ["--allow-outside", "vessels/outside.yaml", "vessels/based.yaml", "vessels/absolute.yaml", "vessels/linked.yaml"],
    [],
  ],
  ["a start from a folder that holds both", ".", ["lib/vessels/outside.yaml"], []],
  [
    "a file of another folder has its own for library",
    "elsewhere",
    ["../lib/vessels/inside.yaml"],
    ["outside-library"],
  ],
  ["a repository is one library wherever one starts", "kept/vessels", ["tank.yaml"], []],
  ["a circle by way of a link", "lib", ["parts/circle.yaml"], ["circular-use"]],
  ["a folder that holds itself", "lib", ["parts/deeper.yaml"], ["circular-use"]],
  ["a part too large to be one", "lib", ["vessels/huge.yaml"], ["file-too-large"]],
  ["a document too large", "lib", ["parts/huge.yaml"], ["file-too-large"]],
] as [string, string, string[], string[]][])("%s", async (_, folder, args, expected) => {
  expect(await codes(folder, ...args)).toEqual(expected);
});
