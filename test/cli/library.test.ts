import { describe, expect, test } from "vitest";
import { at, backmix, json } from "./fake.js";
import { files, tank, tube, vessel } from "./vessels.js";

describe("tidy", () => {
  const untidy = tank.replace("outlets: [product]\n", "").replace("feeds:", "outlets: [ product ]   # out\nfeeds:");

  test("rewrites what is not tidy, and nothing else", async () => {
    const { status, out, written } = await backmix(["tidy", "a.yaml", "tank.yaml"], {
      files: { ...files, "a.yaml": untidy },
    });
    expect(status).toBe(0);
    expect(out).toBe("a.yaml: tidied\ntank.yaml: tidy\n");
    expect([...written]).toEqual([["a.yaml", tank.replace("outlets: [product]", "outlets: [product]     # out")]]);
  });

  test("--check writes nothing and exits 1 where a file is not tidy", async () => {
    const { status, out, written } = await backmix(["tidy", "--check", "a.yaml", "tank.yaml"], {
      files: { ...files, "a.yaml": untidy },
    });
    expect(status).toBe(1);
    expect(out).toBe("a.yaml: not tidy\ntank.yaml: tidy\n");
    expect(written.size).toBe(0);
    expect((await backmix(["tidy", "--check", "tank.yaml"], { files })).status).toBe(0);
  });

  test("leaves a file with faults alone, and tidies the others", async () => {
    const surroundings = { files: { ...files, "a.yaml": untidy, "b.yaml": "network: [\n" } };
    const { status, err, written } = await backmix(["tidy", "b.yaml", "a.yaml", "nowhere.yaml"], surroundings);
    expect(status).toBe(1);
    expect(err).toMatch(/b\.yaml:1:10 unclosed/);
    expect(err).toMatch(/nowhere\.yaml:1:1 file-missing/);
    expect([...written.keys()]).toEqual(["a.yaml"]);
    const { document } = await json(["tidy", "b.yaml", "a.yaml"], surroundings);
    expect(at(document, "ok")).toBe(false);
    expect(at(document, "files.0.problems.0.code")).toBe("unclosed");
    expect(at(document, "files.1.written")).toBe(true);
  });

  test("standard input goes to standard output", async () => {
    const { out, written } = await backmix(["tidy", "-"], { files: { "-": untidy } });
    expect(out).toBe(tank.replace("outlets: [product]", "outlets: [product]     # out"));
    expect(written.size).toBe(0);
    expect((await backmix(["tidy", "-", "tank.yaml"], { files: { ...files, "-": untidy } })).status).toBe(2);
  });
});

describe("diff", () => {
  test("says what changed, with flows before and after", async () => {
    const surroundings = { files: { ...files, "b.yaml": vessel.replace("value: 10 %", "value: 20 %") } };
    const { status, out } = await backmix(["diff", "vessel.yaml", "b.yaml"], surroundings);
    expect(status).toBe(0);
    expect(out).toContain("~ parameter bypass, value: 10 % -> 20 %");
    expect(out).toMatch(/feed>bulk +9 L\/min +8 L\/min +−11\.1 %/);
    const { document } = await json(["diff", "vessel.yaml", "b.yaml"], surroundings);
    expect(at(document, "same")).toBe(false);
    expect(at(document, "differences.0")).toEqual({
      what: "changed",
      of: "parameter",
      name: "bypass",
      key: "value",
      before: "10 %",
      after: "20 %",
      lineBefore: 4,
      lineAfter: 4,
    });
    const figures = at(document, "figures") as { name: string; before: unknown }[];
    expect(figures.find((f) => f.name === "feed>bulk")?.before).toEqual({ value: 9, unit: "L/min" });
  });

  test("says when nothing did", async () => {
    const surroundings = { files: { ...files, "b.yaml": vessel.replace("volume: 700 L", "volume: 0.7 m3") } };
    expect((await backmix(["diff", "vessel.yaml", "b.yaml"], surroundings)).out).toContain("no difference in meaning");
    expect(at((await json(["diff", "vessel.yaml", "b.yaml"], surroundings)).document, "same")).toBe(true);
  });

  test("refuses two documents of different kinds, and broken ones", async () => {
    const kinds = await backmix(["diff", "vessel.yaml", "pulse.yaml"], { files });
    expect(kinds.status).toBe(1);
    expect(kinds.err).toContain("wrong-document");
    expect((await backmix(["diff", "vessel.yaml", "broken.yaml"], { files })).err).toContain("share-sum");
  });
});

test("a variant is told from its base by what it changes", async () => {
  const half = "trial: Half\nformat: 1\nbased-on: pulse.yaml\nchange: {injection: {pulse: 25 g}}\n";
  const surroundings = { files: { ...files, "half.yaml": half } };
  const { out } = await backmix(["diff", "pulse.yaml", "half.yaml"], surroundings);
  expect(out).toContain("  ~ trial: Pulse -> Half\n  ~ injection.pulse: 50 g -> 25 g\n");
});

describe("verify", () => {
  const checked = `${tube}checks:\n  - {mean-time: product, equals: 10 min}\n  - {volume: all, equals: 0.1 m3}\n`;
  const wrong = `${tube}checks:\n  - {mean-time: product, equals: 11 min, within: 1 %}\n`;

  test("every document is sound and every statement holds", async () => {
    const { status, out } = await backmix(["verify", "lib"], {
      files: { "lib/tube.yaml": checked, "lib/deep/tank.yml": tank, "lib/data.csv": "t,c\n" },
    });
    expect(status).toBe(0);
    expect(out).toContain("  holds  mean-time product equals 10 min\n  holds  volume all equals 0.1 m3\n");
    expect(out).toContain("lib/deep/tank.yml: network, ok, no checks");
    expect(out).toContain("lib: 2 documents, all sound, 2 checks, all hold");
  });

  test("1 where a statement does not hold, with what it is", async () => {
    const { status, out } = await backmix(["verify", "lib"], { files: { "lib/a.yaml": checked, "lib/b.yaml": wrong } });
    expect(status).toBe(1);
    expect(out).toContain("  FAILS  mean-time product equals 11 min: it is 10 min, 9.09 % off where 1 % is allowed");
    expect(out).toContain("3 checks, 1 not held");
  });

  test("1 where a document is broken, whatever it is", async () => {
    const { status, out } = await backmix(["verify", "lib"], { files: { "lib/a.yaml": "recipe: Soup\n" } });
    expect(status).toBe(1);
    expect(out).toContain("unknown-document");
    expect(out).toContain("1 document, 1 unsound");
  });

  test("what is not looked into is said", async () => {
    const { out } = await backmix(["verify", "lib"], {
      files: { "lib/a.yaml": checked, "lib/node_modules/x.yaml": "a: 1\n", "lib/.git/y.yaml": "a: 1\n" },
    });
    expect(out).toContain("not looked into: lib/.git, lib/node_modules");
  });

  test("JSON has each statement with its value", async () => {
    const { status, document } = await json(["verify", "lib"], { files: { "lib/b.yaml": wrong } });
    expect(status).toBe(1);
    expect(at(document, "ok")).toBe(false);
    expect(at(document, "files.0.checks.0")).toEqual({
      name: "mean-time product equals 11 min",
      holds: false,
      value: { value: expect.closeTo(10, 9), unit: "min" },
      equals: { value: 11, unit: "min" },
      within: 0.01,
      line: 8,
    });
  });

  test("JUnit counts cases and tells failures, whatever the names", async () => {
    const { status, out } = await backmix(["verify", "lib", "--format", "junit"], {
      files: { "lib/a&b.yaml": checked, "lib/c.yaml": wrong, "lib/d.yaml": 'network: <"a">\nformat: 2\n' },
    });
    expect(status).toBe(1);
    expect(out).toMatch(
      /^<\?xml version="1\.0" encoding="UTF-8"\?>\n<testsuites name="verify lib" tests="6" failures="2">/,
    );
    expect(out).toContain('<testcase classname="lib/a&amp;b.yaml" name="is sound" file="lib/a&amp;b.yaml" line="1"/>');
    expect(out).toContain('<failure message="it is 10 min, 9.09 % off where 1 % is allowed">');
    expect((out.match(/<testcase /g) ?? []).length).toBe(6);
    expect((out.match(/<failure /g) ?? []).length).toBe(2);
    expect((out.match(/&(?!amp;|lt;|gt;|quot;|#10;)/g) ?? []).length).toBe(0);
  });

  test("no folder, or nothing in it, is wrong usage", async () => {
    expect((await backmix(["verify", "nowhere"])).status).toBe(2);
    expect((await backmix(["verify", "lib"], { files: { "lib/a.txt": "" } })).status).toBe(2);
  });
});

describe("equations", () => {
  test("Markdown on standard output, or in a file", async () => {
    const { status, out } = await backmix(["equations", "vessel.yaml"], { files });
    expect(status).toBe(0);
    expect(out).toMatch(/^# Vessel\n/);
    const { written, out: said } = await backmix(["equations", "vessel.yaml", "-o", "v.md"], { files });
    expect(written.get("v.md")).toBe(out);
    expect(said).toBe("v.md: Vessel, 2 states\n");
  });

  test("JSON has each balance with the lines of its terms", async () => {
    const { document } = await json(["equations", "vessel.yaml"], { files });
    const balances = at(document, "balances") as { name: string; is: string; terms: { line: number }[] }[];
    expect(balances.map((b) => `${b.is} ${b.name}`)).toEqual(["state bulk", "state corner", "joint product"]);
    expect(balances[0].terms.map((t) => t.line)).toEqual([5, 7, 7, 7]);
    expect(at(document, "markdown")).toContain("# Vessel");
  });

  test("a broken network has none", async () => {
    expect((await backmix(["equations", "broken.yaml"], { files })).status).toBe(1);
  });
});

describe("fit --write", () => {
  const args = ["fit", "tank.yaml", "--trial", "pulse.yaml", "--write"];
  const text = tank.replace("100 L, between", "100 L,  between").replace("[1 L, 1000 L]}", "[1 L, 1000 L]}  # wetted");

  test("puts the value back and touches nothing else", async () => {
    const { status, out, written } = await backmix(args, { files: { ...files, "tank.yaml": text } });
    expect(status).toBe(0);
    const [[path, after]] = [...written];
    expect(path).toBe("tank.yaml");
    const value = /value: (\S+) L/.exec(after)?.[1] as string;
    expect(Number(value)).toBeCloseTo(80, 3);
    expect(after).toBe(text.replace("value: 100 L", `value: ${value} L`));
    expect(out).toContain(`written to tank.yaml\n  size: 100 L -> ${value} L`);
    const { document } = await json(args, { files: { ...files, "tank.yaml": text } });
    expect(at(document, "written.0.after")).toBe(`${value} L`);
  });

  test("leaves the file alone where a value cannot be put back", async () => {
    const anchored = tank
      .replace("value: 100 L", "value: &v 100 L")
      .replace("outlets", "constants: {other: *v}\noutlets");
    const { status, err, written } = await backmix(args, { files: { ...files, "tank.yaml": anchored } });
    expect(status).toBe(1);
    expect(err).toContain("not-written-back");
    expect(err).toContain("tank.yaml is left as it was");
    expect(written.size).toBe(0);
  });

  test("leaves the file alone after an interrupt, or when it changed meanwhile", async () => {
    const stopped = await backmix(args, { files, cancelled: () => true });
    expect(stopped.status).toBe(130);
    expect(stopped.written.size).toBe(0);
    let reads = 0;
    const { status, err, written } = await backmix(args, {
      files: {
        ...files,
        get "tank.yaml"() {
          return reads++ === 0 ? tank : `${tank}# edited\n`;
        },
      },
    });
    expect(status).toBe(1);
    expect(err).toContain("it changed while the fit ran");
    expect(written.size).toBe(0);
  });
});
