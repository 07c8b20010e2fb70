import { describe, expect, test } from "vitest";
import { at, backmix, json } from "./fake.js";
import { files } from "./vessels.js";

describe("wrong usage ends with 2, a hint and no stack", () => {
  const wrong: [string, string[]][] = [
    ["no command", []],
    ["unknown command", ["simulat"]],
    ["no file", ["check"]],
    ["unknown option", ["check", "tank.yaml", "--colour"]],
    ["nothing to simulate", ["simulate", "tank.yaml"]],
    ["two things to simulate", ["simulate", "tank.yaml", "--pulse", "feed", "--step", "feed"]],
    ["unknown place", ["simulate", "tank.yaml", "--pulse", "fed"]],
    ["unknown inner place", ["simulate", "tank.yaml", "--pulse", "feed", "--at", "bulc"]],
    ["unknown name to set", ["simulate", "tank.yaml", "--pulse", "feed", "--set", "siz=2 L"]],
    ["wrong dimension to set", ["simulate", "tank.yaml", "--pulse", "feed", "--set", "size=2 min"]],
    ["nothing to set", ["simulate", "tank.yaml", "--pulse", "feed", "--set", "size"]],
    ["times without a unit", ["simulate", "tank.yaml", "--pulse", "feed", "--times", "1, 2"]],
    ["times that are no numbers", ["simulate", "tank.yaml", "--pulse", "feed", "--times", "1, x, 2 min"]],
    ["an end in liters", ["simulate", "tank.yaml", "--pulse", "feed", "--until", "6 L"]],
    ["an end before the start", ["simulate", "tank.yaml", "--pulse", "feed", "--until", "-6 h"]],
    ["times and points", ["simulate", "tank.yaml", "--pulse", "feed", "--times", "1 min", "--points", "5"]],
    ["half a point", ["simulate", "tank.yaml", "--pulse", "feed", "--points", "2.5"]],
    ["a billion points", ["simulate", "tank.yaml", "--pulse", "feed", "--points", "1000000000"]],
    ["one point", ["simulate", "tank.yaml", "--pulse", "feed", "--points", "1"]],
    ["an unknown engine", ["simulate", "tank.yaml", "--pulse", "feed", "--engine", "euler"]],
    ["start-up of tracer", ["simulate", "tank.yaml", "--pulse", "feed", "--transient"]],
    ["a duty with times", ["simulate", "tank.yaml", "--duty", "duty.yaml", "--until", "6 h"]],
    ["curves to no CSV", ["simulate", "tank.yaml", "--pulse", "feed", "-o", "curves.xlsx"]],
    ["a fit without trials", ["fit", "tank.yaml"]],
    ["writing to standard input", ["fit", "-", "--trial", "pulse.yaml", "--write"]],
    ["resuming of later", ["fit", "tank.yaml", "--trial", "pulse.yaml", "--resume", "x.json"]],
    ["an unknown parameter", ["fit", "tank.yaml", "--trial", "pulse.yaml", "--free", "volume"]],
    ["a picture of an unknown sort", ["draw", "tank.yaml", "-o", "tank.pdf"]],
    ...["language-server"].map((command): [string, string[]] => [
      `${command}, of later`,
      [command, "x.yaml", "--some", "thing"],
    ]),
  ];
  test.each(wrong)("%s", async (_, args) => {
    const { status, out, err, written } = await backmix(args, { files });
    expect(status).toBe(2);
    expect(out).toBe("");
    expect(err).toMatch(/^(backmix: \S|Usage: backmix)/);
    expect(err).not.toMatch(/\n\s+at /);
    expect(written.size).toBe(0);
  });
  test.each(wrong)("%s, as JSON", async (_, args) => {
    const { status, document } = await json(args, { files });
    expect(status).toBe(2);
    expect(at(document, "ok")).toBe(false);
    expect(at(document, "error.kind")).toBe("usage");
    expect(at(document, "backmix")).toBeTypeOf("string");
    expect(at(document, "inputs")).toBeInstanceOf(Array);
  });
  test("a wrong name is answered with the nearest", async () => {
    const { err } = await backmix(["simulate", "tank.yaml", "--pulse", "fed"], { files });
    expect(err).toContain("did you mean 'feed'?");
  });
});

describe("wrong input ends with 1, all problems and no stack", () => {
  const wrong: [string, string[]][] = [
    ["check", ["check", "broken.yaml"]],
    ["check of a missing file", ["check", "nowhere.yaml"]],
    ["simulate", ["simulate", "broken.yaml", "--pulse", "feed"]],
    ["simulate with a missing trial", ["simulate", "tank.yaml", "--trial", "nowhere.yaml"]],
    ["simulate at impossible values", ["simulate", "vessel.yaml", "--pulse", "feed", "--set", "bypass=120 %"]],
    ["draw", ["draw", "broken.yaml"]],
    ["moments of a network", ["moments", "tank.yaml"]],
    ["fit", ["fit", "broken.yaml", "--trial", "pulse.yaml"]],
    ["fit of a trial for a network", ["fit", "pulse.yaml", "--trial", "pulse.yaml"]],
    ["fit with a missing table", ["fit", "tank.yaml", "--trial", "lost.yaml"]],
    ["study of a network", ["study", "tank.yaml"]],
  ];
  const more = { ...files, "lost.yaml": files["pulse.yaml"].replace("pulse.csv", "nowhere.csv") };
  test.each(wrong)("%s", async (_, args) => {
    const { status, out, err } = await backmix(args, { files: more });
    expect(status).toBe(1);
    expect(out + err).toMatch(/^\S+:\d+:\d+ [a-z-]+: /m);
    expect(out + err).toContain("  fix: ");
    expect(out + err).not.toMatch(/\n\s+at /);
  });
  test.each(wrong)("%s, as JSON", async (_, args) => {
    const { status, document } = await json(args, { files: more });
    expect(status).toBe(1);
    expect(at(document, "ok")).toBe(false);
    const keys = ["code", "severity", "message", "fix", "file", "line", "column", "endLine", "endColumn"];
    expect(Object.keys(at(document, "problems.0") as object)).toEqual(keys);
  });
});

describe("no input shows a stack", () => {
  const odd: [string, string | Uint8Array][] = [
    ["nothing", ""],
    ["no YAML", "{[}"],
    ["bytes", Uint8Array.of(0, 255, 254, 7)],
    ["a list", "- a\n- b\n"],
    ["a bare word", "tank"],
    ["a document of nobody", "recipe: Soup\nformat: 1\n"],
    ["keys without values", "network:\nformat:\nfeeds:\ncompartments:\noutlets:\n"],
    ["deep", "[".repeat(500)],
  ];
  test.each(odd)("%s", async (_, content) => {
    for (const args of [
      ["check", "odd.yaml"],
      ["draw", "odd.yaml"],
      ["moments", "odd.yaml"],
      ["study", "odd.yaml"],
    ]) {
      const { status, out, err } = await backmix(args, { files: { "odd.yaml": content } });
      expect(status).toBe(1);
      expect(out + err).not.toMatch(/fault of backmix|\n\s+at /);
    }
  });
});

test("a fault of ours is owned, without a stack", async () => {
  const files = {
    get "tank.yaml"(): string {
      throw new Error("the disk is on fire");
    },
  };
  const { status, err } = await backmix(["check", "tank.yaml"], { files });
  expect(status).toBe(3);
  expect(err).toContain("fault of backmix, not of your file: the disk is on fire");
  expect(err).not.toMatch(/\n\s+at /);
  const { document } = await json(["check", "tank.yaml"], { files });
  expect(at(document, "error.kind")).toBe("fault");
});

test("standard input is a file like any other", async () => {
  const { status, document } = await json(["check", "-"], { files: { "-": files["tank.yaml"] } });
  expect(status).toBe(0);
  expect(at(document, "inputs.0.path")).toBe("-");
  expect(at(document, "inputs.0.sha256")).toMatch(/^[0-9a-f]{64}$/);
});

test("help and version are documents too when asked", async () => {
  expect((await backmix(["--version"])).status).toBe(0);
  expect((await backmix(["simulate", "--help"])).out).toContain("--pulse <feed>");
  expect(at((await json(["--version"])).document, "backmix")).toBeTypeOf("string");
  expect((await json(["fit", "--help"])).status).toBe(0);
});

describe("every example in the help texts runs", async () => {
  const commands = ["check", "draw", "simulate", "moments", "fit", "tidy", "diff", "verify", "equations"];
  const helps = await Promise.all(commands.map((c) => backmix([c, "--help"])));
  const examples = helps.flatMap(({ out }) => [...out.matchAll(/^ {2}backmix (.+)$/gm)].map((m) => m[1]));
  test("there is one for every command", () => {
    for (const c of commands) expect(examples.some((e) => e.startsWith(`${c} `))).toBe(true);
  });
  test.each(examples)("%s", async (example) => {
    const args = [...example.matchAll(/"([^"]*)"|(\S+)/g)].map((m) => m[1] ?? m[2]);
    const { status, err } = await backmix(args);
    expect(err).toBe("");
    expect(status).toBe(0);
  });
});
