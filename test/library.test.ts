import { existsSync, readdirSync, readFileSync } from "node:fs";
import { dirname, join } from "node:path";
import { describe, expect, test } from "vitest";
import { compile } from "../src/compile/compile.js";
import { parseAny } from "../src/parse/any.js";
import { printProblems } from "../src/problems/print.js";
import { documentKinds } from "../src/schema/shape.js";
import { runChecks } from "../src/simulate/checks.js";
import { formatNumber } from "../src/units/format.js";

const root = join(import.meta.dirname, "..");

/** Every document that is shipped, from the root of the repository. */
const files = ["networks", "shared"].flatMap((folder) =>
  readdirSync(join(root, folder), { recursive: true, encoding: "utf8" })
    .filter((file) => /\.ya?ml$/.test(file))
    .map((file) => `${folder}/${file.replace(/\\/g, "/")}`),
);

function read(path: string): Uint8Array | undefined {
  return existsSync(join(root, path)) ? readFileSync(join(root, path)) : undefined;
}

test("there is a library", () => expect(files.length).toBeGreaterThan(10));

describe.each(files)("%s", (file) => {
  const text = readFileSync(join(root, file), "utf8");
  const { kind, network, problems } = parseAny(text, { path: file, read });

  test("has no problem, warnings included", () => expect(printProblems(problems)).toBe(""));

  test("names its schema on the first line, and its kind on the first after the comments", () => {
    const [, schema] = /^# yaml-language-server: \$schema=(\S+)\n/.exec(text) ?? [];
    const is = kind === "change" ? "network" : kind;
    expect(documentKinds).toContain(is);
    expect(schema).toMatch(new RegExp(`/${is}\\.schema\\.json$`));
    expect(existsSync(join(root, dirname(file), schema))).toBe(true);
    expect(text.replace(/^(#.*\n)+/, "")).toMatch(new RegExp(`^${is}: `));
  });

  if (network && network.checks.length > 0) {
    test("keeps what its checks say", () => {
      const { plant } = compile(network);
      const broken = plant && runChecks(plant).filter((r) => !r.holds);
      expect(broken?.map((r) => `${r.check.what} of ${r.check.of}: ${formatNumber(r.value)}, not ${r.equals}`)).toEqual(
        [],
      );
    });
  }
});
