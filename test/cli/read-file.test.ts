import { execFileSync } from "node:child_process";
import { chmodSync, closeSync, mkdirSync, mkdtempSync, openSync, rmSync, symlinkSync, writeFileSync } from "node:fs";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { afterAll, beforeAll, describe, expect, test } from "vitest";
import { Inputs } from "../../src/cli/inputs.js";
import { files, type Io } from "../../src/cli/io.js";
import { obstacleAt, readRegular, readStream, streamNumber } from "../../src/cli/read-file.js";
import { run } from "../../src/cli/run.js";

const root = mkdtempSync(join(tmpdir(), "backmix-files-"));
const at = (path: string): string => join(root, path);
const tank = `network: Tank
format: 1
feeds: {feed: {flow: 1 L/min, to: tank}}
compartments: {tank: {kind: stirred, volume: 10 L, to: out}}
outlets: [out]
`;
const around = (use: string) => tank.replace("{kind: stirred, volume: 10 L,", `{kind: part, use: ${use},`);

// Links, pipes and devices are the machine's to say; Windows has none of them.
const unix = process.platform !== "win32";

beforeAll(() => {
  if (!unix) return;
  mkdirSync(at("lib/sub"), { recursive: true });
  writeFileSync(at("lib/tank.yaml"), tank);
  symlinkSync("loop2", at("lib/loop1"));
  symlinkSync("loop1", at("lib/loop2"));
  symlinkSync("round.yaml", at("lib/sub/round.yaml"));
  symlinkSync("nowhere", at("lib/sub/lost"));
  execFileSync("mkfifo", [at("lib/fifo.yaml")]);
  writeFileSync(at("lib/closed.yaml"), tank);
  chmodSync(at("lib/closed.yaml"), 0);
  for (const use of ["loop1", "fifo.yaml", "sub", "/dev/zero", "tank.yaml/x", "-"])
    writeFileSync(
      at(`use-${use.replace(/\W/g, "")}.yaml`),
      around(use.startsWith("/") || use === "-" ? JSON.stringify(use) : `lib/${use}`),
    );
  writeFileSync(
    at("trial.yaml"),
    `trial: A
format: 1
injection: {at: feed, pulse: 1 g}
readings: [{at: out, file: lib/fifo.yaml, time: {column: 1, unit: s}, value: {column: 2, unit: g/L}}]
`,
  );
});

afterAll(() => {
  rmSync(root, { recursive: true, force: true });
});

async function backmix(...args: readonly string[]): Promise<{ status: number; found: string[]; out: string }> {
  let out = "";
  const io: Io = {
    ...files(root),
    out: (text) => {
      out += text;
    },
    err: () => {},
    isTerminal: false,
    colour: { out: false, err: false },
    cancelled: () => false,
  };
  const status = await run([...args, "--json"], io);
  const { problems } = JSON.parse(out) as { problems: { code: string; message: string }[] };
  return { status, found: problems.map((p) => `${p.code}: ${p.message}`), out };
}

describe.skipIf(!unix)("what is no file is said to be none, and nothing waits for it", () => {
  test.each([
    ["lib/loop1", "file-unreadable: 'lib/loop1' is a link that leads back to itself"],
    ["lib/fifo.yaml", "file-unreadable: 'lib/fifo.yaml' is a device or a pipe, not a file"],
    ["/dev/zero", "file-unreadable: '/dev/zero' is a device or a pipe, not a file"],
    ["lib/sub", "file-unreadable: 'lib/sub' is a folder, not a file"],
    ["lib/tank.yaml/x", "file-missing: there is no file 'lib/tank.yaml/x'"],
    ["lib/sub/lost", "file-missing: there is no file 'lib/sub/lost'"],
    ["use-loop1.yaml", "file-unreadable: 'lib/loop1' is a link that leads back to itself"],
    ["use-fifoyaml.yaml", "file-unreadable: 'lib/fifo.yaml' is a device or a pipe, not a file"],
    ["use-sub.yaml", "file-unreadable: 'lib/sub' is a folder, not a file"],
    ["use-devzero.yaml", "file-unreadable: '/dev/zero' is a device or a pipe, not a file"],
    ["use-tankyamlx.yaml", "file-missing: there is no file 'lib/tank.yaml/x'"],
    ["use-.yaml", "file-unreadable: '-' is a device or a pipe, not a file"],
    ["trial.yaml", "file-unreadable: 'lib/fifo.yaml' is a device or a pipe, not a file"],
  ])("%s", async (file, problem) => {
    const { status, found } = await backmix("check", "--allow-outside", file);
    expect(found).toEqual([problem]);
    expect(status).toBe(1);
  });

  // Who may do everything may read it.
  test.skipIf(process.getuid?.() === 0)("a file that may not be read", () => {
    expect(obstacleAt(at("lib/closed.yaml"))).toBe("denied");
  });

  test("a walk tells links that lead nowhere, fails and goes on", async () => {
    const { status, found, out } = await backmix("verify", "lib");
    const { skipped, files: looked } = JSON.parse(out) as { skipped: string[]; files: { file: string }[] };
    expect(status).toBe(1);
    expect(skipped).toEqual([]);
    expect(looked.map((f) => f.file)).toContain("lib/tank.yaml");
    expect(found.filter((p) => !p.includes("closed.yaml"))).toEqual([
      "file-unreadable: 'lib/fifo.yaml' is a device or a pipe, not a file",
      "file-unreadable: 'lib/loop1' is a link that leads back to itself",
      "file-unreadable: 'lib/loop2' is a link that leads back to itself",
      "file-unreadable: 'lib/sub/lost' is a link that leads nowhere",
      "file-unreadable: 'lib/sub/round.yaml' is a link that leads back to itself",
    ]);
  });
});

describe("reading", () => {
  test("of a longer file, so many bytes and one more", () => {
    writeFileSync(at("long"), "x".repeat(1000));
    expect(readRegular(at("long"), 1000)?.length).toBe(1000);
    expect(readRegular(at("long"), 999)?.length).toBe(1000);
    expect(readRegular(at("long"), 10)?.length).toBe(11);
    writeFileSync(at("empty"), "");
    expect(readRegular(at("empty"), 10)?.length).toBe(0);
    expect(readRegular(at("nothing"), 10)).toBe(undefined);
  });

  test("of a stream that is open already, as shells hand them over", () => {
    expect(["-", "/dev/stdin", "/dev/fd/63", "/proc/self/fd/4"].map(streamNumber)).toEqual([0, 0, 63, 4]);
    expect(["./-", "tank.yaml", "/dev/zero", "/dev/fd/x"].map(streamNumber)).toEqual(Array(4).fill(undefined));
    writeFileSync(at("stream"), "y".repeat(100_000));
    const file = openSync(at("stream"), "r");
    expect(readStream(file, 200_000)?.length).toBe(100_000);
    closeSync(file);
    expect(readStream(9999, 10)).toBe(undefined);
  });

  test("of a stream without an end, no further than a document may be long", async () => {
    const endless = {
      read: (_: string, most = Number.NaN) => new Uint8Array(most + 1).fill(35),
      obstacle: () => undefined,
    };
    const told = new Inputs(endless).text("-");
    expect(typeof told === "string" ? told : told.message).toBe(
      "the file has more than 2 MB; a document may have 2 MB",
    );
  });

  test.skipIf(!unix)("not of a device that was opened for something else", () => {
    const zero = openSync("/dev/zero", "r");
    expect(readStream(zero, 10)).toBe(undefined);
    closeSync(zero);
  });
});
