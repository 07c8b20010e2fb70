import { describe, expect, test } from "vitest";
import { at, backmix, json } from "./fake.js";
import { files } from "./vessels.js";

const numbers = (document: unknown, path: string): number[] => at(document, path) as unknown as number[];

describe("a pulse", () => {
  test("keeps the contract", async () => {
    const { status, document } = await json(["simulate", "vessel.yaml", "--pulse", "feed", "--at", "bulk,corner"], {
      files,
    });
    expect(status).toBe(0);
    for (const key of ["backmix", "command", "inputs", "engine", "readings", "moments", "balance"]) {
      expect(document).toHaveProperty(key);
    }
    const readings = at(document, "readings") as unknown as object[];
    expect(readings.map((r) => at(r, "at"))).toEqual(["product", "bulk", "corner"]);
    for (const r of readings) {
      expect(Object.keys(r)).toEqual(["at", "time", "value", "cumulative", "spikes", "spikesLeftOut"]);
      expect(numbers(r, "time.values")).toHaveLength(400);
      expect(numbers(r, "value.values")).toHaveLength(400);
      expect(numbers(r, "cumulative.values")).toHaveLength(400);
    }
    expect(Object.keys(at(document, "moments.0") as object)).toEqual([
      "at",
      "area",
      "share",
      "mean",
      "variance",
      "skewness",
    ]);
    expect(Object.keys(at(document, "balance") as object)).toEqual([
      "injected",
      "left",
      "inside",
      "recovered",
      "closure",
    ]);
    expect(at(document, "balance.closure")).toBeLessThan(1e-9);
    expect(at(document, "readings.0.spikes.0")).toEqual({
      time: { value: 0, unit: "min" },
      area: expect.closeTo(0.1, 14),
    });
    expect(at(document, "readings.0.value.unit")).toBe("1/min");
  });

  test("follows the closed form of a tank at the times asked, in their unit", async () => {
    const { document } = await json(["simulate", "tank.yaml", "--pulse", "feed", "--times", "0.5, 0, 0.1 h"], {
      files,
    });
    expect(at(document, "readings.0.time")).toEqual({ unit: "h", values: [0, 0.1, 0.5] });
    const [time, value, cumulative] = ["time", "value", "cumulative"].map((k) =>
      numbers(document, `readings.0.${k}.values`),
    );
    time.forEach((t, i) => {
      expect(value[i]).toBeCloseTo(6 * Math.exp(-6 * t), 12);
      expect(cumulative[i]).toBeCloseTo(-Math.expm1(-6 * t), 12);
    });
  });

  test("through a tube alone is its spike; its skewness is undefined", async () => {
    const { document } = await json(["simulate", "tube.yaml", "--pulse", "feed"], { files });
    expect(numbers(document, "readings.0.value.values").every((v) => v === 0)).toBe(true);
    expect(at(document, "readings.0.spikes")).toEqual([{ time: { value: 10, unit: "min" }, area: 1 }]);
    expect(at(document, "moments.0.skewness")).toBeNull();
    expect(at(document, "moments.0.why")).toBe("undefined");
  });

  test("ends where F is 0.999 unless told", async () => {
    const end = async (...more: string[]): Promise<number> => {
      const { document } = await json(["simulate", "tank.yaml", "--pulse", "feed", ...more], { files });
      return numbers(document, "readings.0.time.values").at(-1) ?? Number.NaN;
    };
    expect(await end()).toBeGreaterThan(10 * Math.log(1000) * 0.999);
    expect(await end()).toBeLessThan(10 * Math.log(1000) * 1.05);
    expect(await end("--until", "2 h", "--points", "5")).toBe(2);
  });

  test("--set moves the vessel", async () => {
    const { document } = await json(["simulate", "tank.yaml", "--pulse", "feed", "--set", "size=0.2 m3"], { files });
    expect(at(document, "moments.0.mean.value")).toBeCloseTo(20, 10);
    const twice = await json(["simulate", "tank.yaml", "--pulse", "feed", "--set", "feed.flow=20 L/min"], { files });
    expect(at(twice.document, "moments.0.mean.value")).toBeCloseTo(5, 10);
  });

  test("--verify compares both engines", async () => {
    const { document } = await json(["simulate", "vessel.yaml", "--pulse", "feed", "--verify"], { files });
    expect(at(document, "verify.engines")).toEqual(["exact", "ode"]);
    expect(at(document, "verify.largestDifference")).toBeGreaterThan(0);
    expect(at(document, "verify.largestDifference")).toBeLessThan(1e-6);
    const { document: other } = await json(["simulate", "vessel.yaml", "--pulse", "feed", "--engine", "ode"], {
      files,
    });
    expect(at(other, "engine")).toBe("ode");
  });

  test("prints moments, spikes and the balance", async () => {
    const { out, err } = await backmix(["simulate", "vessel.yaml", "--pulse", "feed"], { files });
    expect(err).toBe("");
    expect(out).toContain("mean, min");
    expect(out).toMatch(/undispersed at {2}time, min {2}area\n {2}product +0 {2}10 %/);
    expect(out).toMatch(/tracer balance: injected 1, left 0\.999\d*, inside \S+; closure \S+/);
  });
});

test("numbers in JSON and CSV read back to the same double", async () => {
  const args = ["simulate", "vessel.yaml", "--pulse", "feed", "--until", "3 h", "--points", "50"];
  const { document } = await json(args, { files });
  const { written } = await backmix([...args, "-o", "curve.csv"], { files });
  const [header, ...rows] = (written.get("curve.csv") ?? "").trimEnd().split("\n");
  expect(header).toBe("at,time [h],value [1/h],cumulative,spike [1]");
  const points = rows.map((r) => r.split(",")).filter((r) => r[4] === "");
  expect(points.map((r) => Number(r[1]))).toEqual(numbers(document, "readings.0.time.values"));
  expect(points.map((r) => Number(r[2]))).toEqual(numbers(document, "readings.0.value.values"));
  expect(points.map((r) => Number(r[3]))).toEqual(numbers(document, "readings.0.cumulative.values"));
  const [spike] = rows.map((r) => r.split(",")).filter((r) => r[4] !== "");
  expect(Number(spike[4])).toBe(at(document, "readings.0.spikes.0.area"));
  expect(spike.slice(0, 4)).toEqual(["product", "0", "", ""]);
});

test("a step is the integral of the pulse curve", async () => {
  const times = ["--times", "0, 5, 40, 200 min"];
  const pulse = await json(["simulate", "vessel.yaml", "--pulse", "feed", ...times], { files });
  const step = await json(["simulate", "vessel.yaml", "--step", "feed", ...times], { files });
  const integral = numbers(pulse.document, "readings.0.cumulative.values");
  numbers(step.document, "readings.0.value.values").forEach((v, i) => {
    expect(v).toBeCloseTo(integral[i], 12);
  });
  expect(at(step.document, "readings.0.value.unit")).toBe("1");
  expect(at(step.document, "balance.injected")).toEqual({ value: 200, unit: "min" });
});

describe("a trial", () => {
  test("gives what its probes would read, in their unit", async () => {
    const { document } = await json(["simulate", "tank.yaml", "--trial", "pulse.yaml", "--times", "0, 10 min"], {
      files,
    });
    const [first, second] = numbers(document, "readings.0.value.values");
    expect(at(document, "readings.0.value.unit")).toBe("g/L");
    expect(first).toBeCloseTo(0.5, 12);
    expect(second).toBeCloseTo(0.5 * Math.exp(-1), 12);
    expect(at(document, "balance.injected")).toEqual({ value: expect.closeTo(50, 10), unit: "g" });
    expect(at(document, "balance.closure")).toBeLessThan(1e-9);
  });

  test("an instant pulse that slips past is a spike: dose times share over flow", async () => {
    const { document } = await json(["simulate", "vessel.yaml", "--trial", "pulse.yaml"], { files });
    expect(at(document, "readings.0.spikes")).toEqual([
      { time: { value: 0, unit: "min" }, area: { value: expect.closeTo((50 * 0.1) / 10, 10), unit: "g/L min" } },
    ]);
  });

  test("a place that the network lacks is an error of the trial", async () => {
    const { status, document } = await json(["simulate", "tank.yaml", "--trial", "other.yaml"], {
      files: { ...files, "other.yaml": files["pulse.yaml"].replace("at: product", "at: produkt") },
    });
    expect(status).toBe(1);
    expect(at(document, "problems.0.code")).toBe("unknown-place");
    expect(at(document, "problems.0.file")).toBe("other.yaml");
  });
});

describe("mean ages", () => {
  test("of every node, and the time yet to stay: age at the outlet is the mean time, as is what the feed has before it", async () => {
    const { out, written } = await backmix(
      ["simulate", "vessel.yaml", "--pulse", "feed", "--ages", "ages.csv", "--json"],
      { files },
    );
    const document: unknown = JSON.parse(out);
    expect(at(document, "ages")).toBe("ages.csv");
    const [header, ...rows] = (written.get("ages.csv") ?? "").trim().split("\n");
    expect(header).toBe("leaving,mean age [min],left to stay on entering [min]");
    const of = (name: string) =>
      rows
        .find((r) => r.startsWith(`${name},`))
        ?.split(",")
        .slice(1)
        .map(Number) ?? [];
    const mean = at(document, "moments.0.mean.value") as unknown as number;
    expect(of("product")[0]).toBeCloseTo(mean, 9);
    expect(of("feed")[1]).toBeCloseTo(mean, 9);
  });

  test("need a pulse or a step, and a table to go to", async () => {
    const trial = await backmix(["simulate", "vessel.yaml", "--trial", "t.yaml", "--ages", "a.csv"], { files });
    expect(trial.status).toBe(2);
    expect(trial.err).toContain("--ages goes with --pulse or --step");
    const other = await backmix(["simulate", "vessel.yaml", "--pulse", "feed", "--ages", "a.txt"], { files });
    expect(other.err).toContain("ends in .csv");
  });
});

test("curves are written as the ending of the file asks: CSV, or a figure with its axis and its spikes", async () => {
  const base = ["simulate", "networks/demo/bypass.yaml"];
  const pulse = await backmix([...base, "--pulse", "feed", "-o", "e.svg"]);
  expect(pulse.status).toBe(0);
  expect(pulse.written.get("e.svg")).toContain("E, exit age (c·Q / amount), 1/min");
  expect(pulse.written.get("e.svg")).toContain("5\u2009% at 0");
  const step = await backmix([...base, "--step", "feed", "-o", "f.SVG"]);
  expect(step.written.get("f.SVG")).toContain("F, share of what leaves that came in since");
  const trial = await backmix([...base, "--trial", "networks/demo/salt-normal.yaml", "-o", "t.png"]);
  expect(trial.written.get("t.png")?.slice(1, 4)).toBe("PNG");
  const wrong = await backmix([...base, "--pulse", "feed", "-o", "e.pdf"]);
  expect(wrong.status).toBe(2);
  expect(wrong.err).toContain("CSV, SVG or PNG");
});
