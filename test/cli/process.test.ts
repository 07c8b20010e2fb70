import { type ChildProcess, spawn } from "node:child_process";
import { mkdirSync, mkdtempSync, readdirSync, readFileSync, rmSync, writeFileSync } from "node:fs";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { pathToFileURL } from "node:url";
import { afterAll, beforeAll, describe, expect, test } from "vitest";
import { buildProgram, keepCompiled } from "../../.build/program.mjs";
import { framed, MessageReader } from "../../src/cli/language-server/messages.js";
import { files } from "./vessels.js";

// The program as it is shipped: one bundle, a process of its own.
const folder = mkdtempSync(join(tmpdir(), "backmix-"));
const script = join(folder, "dist", "backmix.js");

beforeAll(async () => {
  await buildProgram(process.cwd(), join(folder, "dist"), "9.8.7");
  writeFileSync(join(folder, "package.json"), '{"type": "module"}');
  for (const [name, text] of Object.entries(files)) writeFileSync(join(folder, name), text);
});

const children: ChildProcess[] = [];

afterAll(() => {
  for (const child of children) child.kill("SIGKILL");
  rmSync(folder, { recursive: true, force: true });
});

function start(args: readonly string[]): ChildProcess {
  const child = spawn(process.execPath, [script, ...args], { cwd: folder, stdio: "pipe" });
  children.push(child);
  return child;
}

function ended(child: ChildProcess): Promise<{ status: number | null; out: string; err: string }> {
  let out = "";
  let err = "";
  child.stdout?.on("data", (chunk) => {
    out += chunk;
  });
  child.stderr?.on("data", (chunk) => {
    err += chunk;
  });
  return new Promise((done) => child.on("close", (status) => done({ status, out, err })));
}

describe("the program as a process", () => {
  test("refits give the same bytes on one thread and on several", async () => {
    const command = ["fit", "tank.yaml", "--trial", "pulse.yaml", "--bootstrap", "90", "--json", "--jobs"];
    const [one, several] = await Promise.all(["1", "3"].map((jobs) => ended(start([...command, jobs]))));
    expect(one.status).toBe(0);
    expect(JSON.parse(one.out).bootstrap).toMatchObject({ done: 90, failed: 0 });
    expect(several).toEqual(one);
  });

  test("gives its version", async () => {
    expect(await ended(start(["--version"]))).toEqual({ status: 0, out: "9.8.7\n", err: "" });
  });

  test("says the same by code that was compiled before, and where what lies there is no code", async () => {
    const dist = join(folder, "dist");
    const first = await ended(start(["check", "tank.yaml"]));
    await keepCompiled(process.cwd(), dist, [["check", join(folder, "tank.yaml")]]);
    const kept = readdirSync(join(dist, "chunks")).filter((name) => name.endsWith(".code"));
    expect(kept.length).toBeGreaterThan(5);
    expect(await ended(start(["check", "tank.yaml"]))).toEqual(first);
    for (const name of kept) writeFileSync(join(dist, "chunks", name), "no code");
    expect(await ended(start(["check", "tank.yaml"]))).toEqual(first);
    for (const name of kept) rmSync(join(dist, "chunks", name));
  });

  test("exits with the status of the command", async () => {
    expect((await ended(start(["check", "tank.yaml"]))).status).toBe(0);
    expect((await ended(start(["check", "broken.yaml"]))).status).toBe(1);
    expect((await ended(start(["chek"]))).status).toBe(2);
    expect((await ended(start(["fit", "tank.yaml"]))).status).toBe(2);
  });

  test("fits in a thread of its own with the same words", async () => {
    const { status, out, err } = await ended(start(["fit", "tank.yaml", "--trial", "pulse.yaml", "--json"]));
    expect(err).toBe("");
    expect(status).toBe(0);
    expect(JSON.parse(out).parameters.size.value).toBeCloseTo(80, 3);
  });

  test("writes a file whole and leaves nothing beside it", async () => {
    const nowhere = await ended(start(["simulate", "tank.yaml", "--pulse", "feed", "-o", "made/curve.csv"]));
    expect(nowhere.status).toBe(2);
    expect(nowhere.err).toContain("there is no such folder");
    mkdirSync(join(folder, "made"));
    const { status } = await ended(start(["simulate", "tank.yaml", "--pulse", "feed", "-o", "made/curve.csv"]));
    expect(status).toBe(0);
    expect(readdirSync(join(folder, "made"))).toEqual(["curve.csv"]);
    expect(readFileSync(join(folder, "made/curve.csv"), "utf8").split("\n")).toHaveLength(402);
  });

  test("says where it cannot write", async () => {
    const { status, err } = await ended(
      start(["simulate", "tank.yaml", "--pulse", "feed", "-o", "tank.yaml/curve.csv"]),
    );
    expect(status).toBe(2);
    expect(err).toMatch(/'tank\.yaml\/curve\.csv' cannot be written/);
  });

  test("a folder in place of a file is said to be one", async () => {
    const { status, out } = await ended(start(["check", "dist"]));
    expect(status).toBe(1);
    expect(out).toContain("file-unreadable");
  });

  // Windows knows no interrupt that one process can send another.
  test.skipIf(process.platform === "win32")("an interrupt ends a fit with its best so far and 130", async () => {
    writeFileSync(join(folder, "p1.csv"), readFileSync("test/fit/p1/p1-data.csv"));
    writeFileSync(
      join(folder, "p1-pulse.yaml"),
      readFileSync("test/fit/p1/p1-pulse.yaml", "utf8").replace("p1-data.csv", "p1.csv"),
    );
    const child = start(["fit", "-", "--trial", "p1-pulse.yaml", "--starts", "200000"]);
    const end = ended(child);
    // More than a pipe holds: once it is all gone, the fit has begun to read and the interrupt will be heard.
    const long = `${readFileSync("test/fit/p1/p1.yaml", "utf8")}${"# as drawn\n".repeat(100_000)}`;
    await new Promise((flushed) => child.stdin?.end(long, () => flushed(undefined)));
    await new Promise((later) => setTimeout(later, 300));
    child.kill("SIGINT");
    const { status, out, err } = await end;
    expect(err).toContain("backmix: stopping");
    expect(status).toBe(130);
    expect(out).toContain("interrupted: best so far");
  });
});

test("language-server speaks its protocol on standard input and output, and nothing else", async () => {
  const child = start(["language-server"]);
  const end = ended(child);
  const send = (message: object) => child.stdin?.write(framed(message));
  const uri = pathToFileURL(join(folder, "tank.yaml")).href;
  send({ id: 1, method: "initialize", params: { capabilities: {}, processId: null, rootUri: null } });
  send({ method: "initialized", params: {} });
  send({
    method: "textDocument/didOpen",
    params: { textDocument: { uri, languageId: "yaml", version: 1, text: "network: A\n" } },
  });
  send({ id: 2, method: "textDocument/hover", params: { textDocument: { uri }, position: { line: 0, character: 2 } } });
  send({ id: 3, method: "shutdown" });
  send({ method: "exit" });
  const { status, out, err } = await end;
  expect([status, err]).toEqual([0, ""]);
  const reader = new MessageReader();
  const got = reader.take(Buffer.from(out));
  expect(out).toBe(got.map((m) => framed(m as object)).join(""));
  expect(got.map((m) => m?.id ?? m?.method)).toEqual([1, "textDocument/publishDiagnostics", 2, 3]);
  const [, told, hover] = got as {
    params?: { diagnostics: { code: string }[] };
    result?: { contents: { value: string } };
  }[];
  expect(told.params?.diagnostics.map((d) => d.code)).toContain("missing-format");
  expect(hover.result?.contents.value).toContain("**network**");
  // a client that goes away without a word leaves nothing behind
  const lost = start(["language-server"]);
  const gone = ended(lost);
  lost.stdin?.end();
  expect((await gone).status).toBe(1);
});
