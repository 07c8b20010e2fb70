import { describe, expect, test } from "vitest";
import { checkTrial } from "../../src/check/trial.js";
import { parseNetwork } from "../../src/parse/network.js";
import { parseTrial } from "../../src/parse/trial.js";
import { collector } from "../../src/problems/report.js";

const columns = "time: {column: t, unit: min}, value: {column: c, unit: g/L}";
const log = "t,c\n0,0\n1,0.2\n2,1.4\n3,1.1\n4,0.6\n5,0.1\n";

function parse(lines: string, files: Record<string, string> = { "log.csv": log }) {
  const { document, problems } = parseTrial(`trial: T\nformat: 1\n${lines}\n`, {
    path: "t.yaml",
    read: (p) => files[p],
  });
  return { trial: document, problems, codes: problems.map((p) => p.code) };
}

const reading = (more = "", where = columns) =>
  `readings: [{at: product, file: log.csv, ${where}${more && `, ${more}`}}]`;

test("the trial of the language's own description is read whole, in SI", () => {
  const rows = Array.from({ length: 400 }, (_, i) => {
    const s = 9 * 3600 + 14 * 60 + i * 60;
    const two = (x: number) => String(Math.floor(x) % 60).padStart(2, "0");
    return `${two(s / 3600)}:${two(s / 60)}:${two(s)};${String(0.21 + (i > 5 ? Math.exp(-i / 50) : 0)).replace(".", ",")}`;
  });
  const text = `
vessel: v3.yaml
flows: {feed: 10 L/min ± 2 %}
with: {speed: 90 1/min}
injection: {at: feed, pulse: 50 g ± 1 %, start: 09:14:20, lasting: 2 min}
readings:
  - at: product
    file: v3-salt.csv
    time: {column: Time, format: "h:m:s"}
    value: {column: "Cond [mS/cm]", unit: mS/cm}
    calibration: {blank: 0.21 mS/cm, rise: 1.9 mS/cm, per: 1 g/L}
    baseline: drift
    scale: known
    line: {delay: 0.3 min, lag: 0.1 min}
    noise: {floor: 0.01 g/L, relative: 1 %}
    leave-out: [{from: 310 min, to: 320 min, because: air in the cell}]`;
  const { trial, problems } = parse(text, { "v3-salt.csv": `Time;Cond [mS/cm]\n${rows.join("\n")}` });
  expect(problems).toEqual([]);
  const nine = 9 * 3600 + 14 * 60;
  expect(trial?.injections[0]).toMatchObject({ at: "feed", start: nine + 20, lasting: 120 });
  expect(trial?.flows.get("feed")?.of([])).toBeCloseTo(10e-3 / 60, 15);
  expect(trial?.flows.get("feed")?.sd?.([])).toBeCloseTo(0.2e-3 / 60, 15);
  expect(trial?.with.get("speed")?.of([])).toBeCloseTo(1.5, 12);
  const [r] = trial?.readings ?? [];
  expect(r.series?.time[0]).toBe(nine);
  expect(r.series?.value[0]).toBeCloseTo(0.021, 12); // S/m
  expect(r.calibration?.slope(0)).toBeCloseTo(1 / 0.19, 12); // kg/m3 per S/m
  expect(r.unit.name).toBe("g/L");
  expect(r.line.delay?.of([])).toBeCloseTo(18, 12);
  expect(r.noise?.floor?.of([])).toBeCloseTo(0.01, 12);
  expect(r.noise?.relative).toBeCloseTo(0.01, 12);
  // Elapsed times count from the first row.
  expect(r.leaveOut[0]).toMatchObject({ from: nine + 310 * 60, to: nine + 320 * 60, because: "air in the cell" });
});

describe("where the clock starts", () => {
  const clocked = (text: string) =>
    `t,c\n${text
      .split(" ")
      .map((t, i) => `${t},${i}`)
      .join("\n")}`;
  const asClock = 'time: {column: t, format: "h:m"}, value: {column: c, unit: g/L}';

  test("elapsed times: 0; clock times: the first row", () => {
    expect(parse(`injection: {at: feed, pulse: 1 g}\n${reading()}`).trial?.injections[0].start).toBe(0);
    const files = { "log.csv": clocked("9:00 9:10 9:20") };
    const { trial } = parse(`injection: {at: feed, pulse: 1 g}\n${reading("", asClock)}`, files);
    expect(trial?.injections[0].start).toBe(9 * 3600);
  });

  test("a sampler that starts after midnight belongs to the injection before it", () => {
    const files = { "log.csv": clocked("0:10 0:20 0:30"), "other.csv": clocked("23:45 0:15 0:40") };
    const injection = 'injection: {at: feed, pulse: 1 g, start: "23:50"}';
    const one = parse(`${injection}\n${reading("", asClock)}`, files);
    expect(one.problems).toEqual([]);
    expect(one.trial?.readings[0].series?.time[0]).toBe(600);
    expect(one.trial?.injections[0].start).toBe(-600);
    const two = parse(
      `${injection}\nreadings:\n  - {at: a, file: log.csv, ${asClock}}\n  - {at: b, file: other.csv, ${asClock}}`,
      files,
    );
    expect(two.trial?.injections[0].start).toBe(85_800);
    expect(two.trial?.readings.map((r) => r.series?.time[0])).toEqual([87_000, 85_500]);
  });

  test("a start after the last reading is refused", () => {
    const files = { "log.csv": clocked("9:00 9:10 9:20") };
    expect(parse(`injection: {at: feed, pulse: 1 g, start: "10:00"}\n${reading("", asClock)}`, files).codes).toEqual([
      "start-late",
    ]);
  });

  test("dates: from midnight of the first day, a time of day in the document is of that day", () => {
    const dated = "t,c\n2024-03-05T23:50:00,0\n2024-03-06T00:10:00,1\n2024-03-06T00:30:00,2\n";
    const { trial, problems } = parse(
      `injection: {at: feed, pulse: 1 g, start: 23:55:00}\n${reading("", "time: {column: t}, value: {column: c, unit: g/L}")}`,
      { "log.csv": dated },
    );
    expect(problems).toEqual([]);
    expect(trial?.injections[0].start).toBe(86_400 - 300);
    expect([...(trial?.readings[0].series?.time ?? [])]).toEqual([85_800, 87_000, 88_200]);
  });
});

describe("a detector's own words", () => {
  test("stand where only the shape counts, or a calibration turns them into a concentration", () => {
    const own = "time: {column: t, unit: min}, value: {column: c, unit: blips}";
    expect(parse(`injection: {at: feed, pulse: 3 squirts ± 5 %}\n${reading("scale: free", own)}`).codes).toEqual([]);
    const calibrated = reading("calibration: {blank: 2 blips, rise: 9 blips, per: 1 g/L}", own);
    expect(parse(`injection: {at: feed, pulse: 3 g}\n${calibrated}`).codes).toEqual([]);
    const other = reading("calibration: {blank: 2 blobs, rise: 9 blips, per: 1 g/L}", own);
    expect(parse(`injection: {at: feed, pulse: 3 g}\n${other}`).codes).toEqual(["reading-unit"]);
  });

  test("are refused elsewhere, never taken for a unit", () => {
    const own = "time: {column: t, unit: min}, value: {column: c, unit: blips}";
    expect(parse(`injection: {at: feed, pulse: 3 g}\n${reading("", own)}`).codes).toEqual(["unknown-unit"]);
    expect(parse(`injection: {at: feed, pulse: 3 squirts}\n${reading()}`).trial).toBeUndefined();
  });
});

test("a reading without a file is a plan", () => {
  const { trial, problems } = parse(
    "injection: {at: feed, pulse: 1 mol}\nreadings: [{at: product, noise: {floor: 1 mmol/L}}]",
  );
  expect(problems).toEqual([]);
  expect(trial?.readings[0].series).toBeUndefined();
  expect(trial?.readings[0].unit.name).toBe("mmol/L"); // that of the floor of its noise
});

test("the floor of noise in the detector's unit becomes a concentration", () => {
  const detector = "time: {column: t, unit: min}, value: {column: c, unit: mS/cm}";
  const more = "calibration: {blank: 0 mS/cm, rise: 2 mS/cm, per: 1 g/L}, noise: {floor: 0.02 mS/cm}";
  const { trial } = parse(`injection: {at: feed, pulse: 1 g}\n${reading(more, detector)}`);
  expect(trial?.readings[0].noise?.floor?.of([])).toBeCloseTo(0.01, 12);
});

test("a measured inlet is calibrated, cut and moved as declared", () => {
  const inlet = `{file: log.csv, ${columns}, line: {delay: 1 min}, leave-out: [{from: 3.5 min, to: 4.5 min, because: air}]}`;
  const { trial, problems } = parse(`injection:\n  at: feed\n  signal: ${inlet}\n${reading()}`);
  expect(problems).toEqual([]);
  const form = trial?.injections[0].form;
  expect(form?.is === "signal" && [...form.table.time]).toEqual([-60, 0, 60, 120, 240]);
});

test("every fault is reported in one run", () => {
  const { codes } = parse(
    `flows: {feed: -1 L/min}\ninjection: {at: feed, pulse: 0 g, start: noon}\n${reading("", columns.replace("c,", "d,"))}`,
  );
  expect(codes).toEqual(expect.arrayContaining(["below-zero", "column-missing"]));
  expect(codes.length).toBeGreaterThanOrEqual(3);
});

describe("against a network", () => {
  const network = parseNetwork(
    "network: N\nformat: 1\nconstants: {speed: 60 1/min, pump: 2 L}\n" +
      "feeds: {feed: {flow: 10 L/min, to: bulk}}\ncompartments:\n" +
      "  bulk: {kind: stirred, volume: 100 L + pump * speed / (60 1/min), repeat: 2, to: product}\noutlets: [product]\n",
    { path: "n.yaml" },
  ).document;
  const check = (lines: string) => {
    const { trial } = parse(lines);
    const { report, problems } = collector();
    if (trial) checkTrial(network, trial, report);
    return problems.map((p) => `${p.code}: ${p.message}; ${p.fix}`);
  };

  test("feeds, places and constants are there", () => {
    expect(network).toBeDefined();
    expect(
      check(`with: {speed: 90 1/min}\nflows: {feed: 9 L/min}\ninjection: {at: bulk.2, pulse: 1 g}\n${reading()}`),
    ).toEqual([]);
  });

  test("what is not there is named, with the nearest", () => {
    const found = check(
      `with: {sped: 90 1/min}\nflows: {fed: 9 L/min}\ninjection: {at: bluk, pulse: 1 g}\n${reading().replace("product", "produkt")}`,
    );
    expect(found).toHaveLength(4);
    expect(found.every((f) => f.startsWith("unknown-place"))).toBe(true);
    for (const meant of ["speed", "feed", "bulk", "product"]) expect(found.join("\n")).toContain(`'${meant}'`);
  });
});
