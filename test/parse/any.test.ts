import { describe, expect, test } from "vitest";
import { parseAny } from "../../src/parse/any.js";
import { parseNetwork } from "../../src/parse/network.js";
import { parseStudy } from "../../src/parse/study.js";
import { hasErrors } from "../../src/problems/report.js";

const vessel = `network: A tank
format: 1
constants: {total: 100 L}
parameters: {bypass: {value: 10 %, between: [0 %, 50 %]}}
feeds: {feed: {flow: 10 L/min, to: {a: rest, out: bypass}}}
compartments: {a: {kind: stirred, volume: total, to: out}}
outlets: [out]
`;
const log = "t,c\n0,0\n5,0.3\n10,0.2\n20,0.1\n";
const trial = `trial: A pulse
format: 1
injection: {at: feed, pulse: 50 g}
readings: [{at: out, file: log.csv, time: {column: t, unit: min}, value: {column: c, unit: g/L}}]
`;
const change = "network: Less slips by\nformat: 1\nchange: {parameters: {bypass: {value: 2 %}}}\n";
const chemistry = `chemistry: Decay
format: 1
species: {A: {}}
constants: {k: 0.1 1/min}
reactions: [{makes: {A: -1}, rate: k * A}]
`;
const duty = `duty: Normal
format: 1
chemistry: decay.yaml
feeds: {feed: {A: 1 mol/L}}
report: [conversion of A]
`;
const study = `study: Why
format: 1
rivals: [v/vessel.yaml]
trials: [v/trial.yaml]
duties: [v/duty.yaml]
changes: [v/change.yaml]
seed: 7
`;

const files: Record<string, string> = {
  "v/vessel.yaml": vessel,
  "v/trial.yaml": trial,
  "v/log.csv": log,
  "v/change.yaml": change,
  "v/decay.yaml": chemistry,
  "v/duty.yaml": duty,
};
const reading = (more: Record<string, string> = {}) => {
  const asked: string[] = [];
  const read = (path: string): string | undefined => {
    asked.push(path);
    return { ...files, ...more }[path];
  };
  return { asked, read };
};
const told = (text: string, path: string, more: Record<string, string> = {}): string[] =>
  parseAny(text, { path, read: reading(more).read }).problems.map((p) => `${p.at.source.path} ${p.code}`);

describe("a document is known by its first key", () => {
  test.each([
    ["network", vessel],
    ["change", change],
    ["trial", trial],
    ["chemistry", chemistry],
    ["duty", duty],
  ])("%s", (kind, text) => {
    const parsed = parseAny(text, { path: "v/x.yaml", read: reading().read });
    expect(parsed.problems).toEqual([]);
    expect(parsed.kind).toBe(kind);
    expect(parsed.network === undefined).toBe(kind !== "network");
  });

  test("and by no other", () => {
    expect(parseAny("vessel: A\nformat: 1\n").kind).toBeUndefined();
    expect(told("vessel: A\nformat: 1\n", "x.yaml")).toEqual(["x.yaml unknown-document"]);
    expect(parseAny("").kind).toBeUndefined();
  });

  test("bytes with a mark and line ends of another system are the same document", () => {
    const parsed = parseNetwork(`\uFEFF${vessel.replace(/\n/g, "\r\n")}`);
    expect(parsed.problems).toEqual([]);
    expect(parsed.document?.compartments.map((c) => c.name)).toEqual(["a"]);
  });
});

describe("a trial beside the vessel that it names", () => {
  const at = (vesselLine: string, more = {}) => told(`${trial}${vesselLine}\n`, "v/trial.yaml", more);
  test("fits it", () => expect(at("vessel: vessel.yaml")).toEqual([]));
  test("is told where it does not", () => {
    expect(told(`${trial}vessel: vessel.yaml\nwith: {totl: 90 L}\n`, "v/trial.yaml")).toEqual([
      "v/trial.yaml unknown-place",
    ]);
  });
  test("is told that the vessel is not there, or broken", () => {
    expect(at("vessel: other.yaml")).toEqual(["v/trial.yaml file-missing"]);
    expect(at("vessel: other.yaml", { "v/other.yaml": vessel.replace("total: 100 L", "total: 100 l/h") })).toEqual([
      "v/other.yaml wrong-dimension",
    ]);
  });
});

describe("a study", () => {
  test("brings together all that it names, each once", () => {
    const { asked, read } = reading();
    const { document, problems } = parseStudy(study, { path: "study.yaml", read });
    expect(problems).toEqual([]);
    expect(document).toMatchObject({ title: "Why", seed: 7, out: undefined });
    expect(document?.rivals.map((r) => r.path)).toEqual(["v/vessel.yaml"]);
    expect(document?.trials[0].readings[0].series?.time).toEqual(Float64Array.of(0, 300, 600, 1200));
    expect(document?.duties[0].chemistry?.title).toBe("Decay");
    expect(document?.changes[0].title).toBe("Less slips by");
    expect(new Set(asked).size).toBe(asked.length);
  });

  test("tells what is wrong in any of them, and what does not fit together", () => {
    const broken = { "v/vessel.yaml": vessel.replace("10 L/min", "10 L"), "v/log.csv": "t,c\n0,0\n5,x\n3,1\n9,9\n" };
    expect(told(study, "study.yaml", broken)).toEqual([
      "v/vessel.yaml wrong-dimension",
      "v/log.csv cell-not-number",
      "v/log.csv time-back",
    ]);
    expect(told(study, "study.yaml", { "v/trial.yaml": trial.replace("at: out", "at: outt") })).toEqual([
      "v/trial.yaml unknown-place",
    ]);
    expect(told(study, "study.yaml", { "v/duty.yaml": duty.replace("{feed:", "{fed:") })).toEqual([
      "v/duty.yaml unknown-place",
    ]);
  });

  test("tells of a trial once, not once for each rival", () => {
    const two = study.replace("[v/vessel.yaml]", "[v/vessel.yaml, v/second.yaml]");
    const more = { "v/second.yaml": vessel, "v/trial.yaml": trial.replace("at: feed", "at: fed") };
    expect(told(two, "study.yaml", more)).toEqual(["v/trial.yaml unknown-place"]);
  });
});

describe("problems", () => {
  test("come in the order of the file, warnings beside a document, none beside an error", () => {
    const { document, problems } = parseNetwork(vessel.replace("total: 100 L", "total: 100 L, idle: 1 L"));
    expect(problems.map((p) => p.code)).toEqual(["unused-name"]);
    expect(document).toBeDefined();
    const broken = parseNetwork(
      vessel.replace("total: 100 L", "total: 100 L, idle: 1 L").replace("[0 %, 50 %]", "[20 %, 50 %]"),
    );
    expect(broken.problems.map((p) => p.code)).toEqual(["unused-name", "start-outside-bounds"]);
    expect(broken.document).toBeUndefined();
    expect(hasErrors(broken.problems)).toBe(true);
  });

  test("of shape and of values show together, no place twice", () => {
    const text = vessel
      .replace("100 L", "100L")
      .replace("outlets", "outlet")
      .replace("stirred", "stired")
      .replace("10 L/min", "[1]");
    const problems = parseNetwork(text).problems;
    expect(problems.map((p) => p.code)).toEqual(["space-before-unit", "wrong-shape", "wrong-choice", "unknown-key"]);
    expect(new Set(problems.map((p) => p.at.from)).size).toBe(problems.length);
  });
});
