import { describe, expect, test } from "vitest";
import { at, backmix, json } from "./fake.js";
import { files } from "./vessels.js";

const command = ["fit", "tank.yaml", "--trial", "pulse.yaml"];

describe("fit", () => {
  test("keeps the contract", async () => {
    const { status, document } = await json(command, { files });
    expect(status).toBe(0);
    const keys =
      "parameters nuisance residualSumOfSquares observations freeParameters aicc bic correlation converged evaluations optima readings findings";
    for (const key of ["backmix", "command", "inputs", ...keys.split(" ")]) expect(document).toHaveProperty(key);
    const size = at(document, "parameters.size") as object;
    expect(Object.keys(size)).toEqual(["value", "unit", "standardError", "interval95", "atBound"]);
    expect(Object.keys(at(document, "readings.0") as object)).toEqual([
      "trial",
      "at",
      "key",
      "time",
      "measured",
      "fitted",
      "residual",
    ]);
    expect(at(document, "readings.0.time.unit")).toBe("min");
    expect((at(document, "inputs") as unknown as { path: string }[]).map((i) => i.path)).toEqual([
      "tank.yaml",
      "pulse.yaml",
      "pulse.csv",
    ]);
  });

  test("finds the volume that the data were made with", async () => {
    const { document } = await json(command, { files });
    expect(at(document, "parameters.size.value")).toBeCloseTo(80, 3);
    expect(at(document, "parameters.size.unit")).toBe("L");
    const [low, high] = at(document, "parameters.size.interval95") as unknown as [number, number];
    expect(low).toBeLessThan(80.001);
    expect(high).toBeGreaterThan(79.999);
    expect(high - low).toBeLessThan(0.01);
  });

  test("--profile adds a profile of every parameter", async () => {
    const { document } = await json([...command, "--profile"], { files });
    const profile = at(document, "profiles.size") as unknown as Record<string, never>;
    expect(Object.keys(profile)).toEqual(["value", "deviation", "interval95", "ends"]);
    const [low, high] = profile.interval95 as number[];
    expect(low).toBeLessThan(80.001);
    expect(high).toBeGreaterThan(79.999);
    expect((await backmix([...command, "--profile"], { files })).out).toMatch(/^ {2}profile +95 % from +to +unit/m);
  });

  test("--bootstrap refits data made anew, and goes on where it was left", async () => {
    const again = [...command, "--bootstrap", "60", "--resume", "done.json"];
    const first = await backmix([...command, "--bootstrap", "60"], { files });
    expect(first.out).toMatch(/^ {2}bootstrap +median +standard error +95 % from +to +unit/m);
    expect(first.out).toContain("60 refits, residuals drawn");
    const part = await backmix([...command, "--bootstrap", "25", "--resume", "done.json"], { files });
    const done = part.written.get("done.json") as string;
    expect(JSON.parse(done).rows).toHaveLength(25);
    const whole = await backmix(again, { files: { ...files, "done.json": done } });
    expect(whole.out).toBe(first.out);
    const { document } = await json(again, { files: { ...files, "done.json": done } });
    expect(Object.keys(at(document, "bootstrap.parameters.size") as object)).toEqual([
      "value",
      "unit",
      "standardError",
      "interval95",
    ]);
    const otherwise = await backmix([...again, "--seed", "2"], { files: { ...files, "done.json": done } });
    expect(otherwise.status).toBe(2);
    expect(otherwise.err).toContain("belongs to another fit");
    expect((await backmix([...again, "--seed", "2"], { files: { ...files, "done.json": "{}" } })).err).toContain(
      "was not written by a bootstrap",
    );
    expect((await backmix([...command, "--resume", "x"], { files })).err).toContain("--resume goes with --bootstrap");
  });

  test("residuals add up to the sum of squares", async () => {
    const { document } = await json(command, { files });
    const residuals = at(document, "readings.0.residual.values") as unknown as number[];
    expect(residuals.reduce((s, r) => s + r * r, 0)).toBeCloseTo(at(document, "residualSumOfSquares") as number, 15);
  });

  test("an interrupt prints what is known, marked, and ends with 130", async () => {
    let asked = 0;
    const { status, out, err } = await backmix(command, { files, cancelled: () => ++asked > 3 });
    expect(status).toBe(130);
    expect(out).toContain("interrupted: best so far");
    expect(out).toMatch(/^ {2}size /m);
    expect(err).toContain("interrupted");
    asked = 0;
    const { document } = await json(command, { files, cancelled: () => ++asked > 3 });
    expect(at(document, "stopped")).toBe("cancelled");
    expect(at(document, "converged")).toBe(false);
  });

  test("--strict refuses a parameter at its bound", async () => {
    const tight = { ...files, "tank.yaml": files["tank.yaml"].replace("[1 L, 1000 L]", "[90 L, 1000 L]") };
    expect((await backmix(command, { files: tight })).status).toBe(0);
    const { status, out, err } = await backmix([...command, "--strict"], { files: tight });
    expect(status).toBe(1);
    expect(out).toContain("at its lower bound");
    expect(err).toContain("--strict");
    expect((await backmix([...command, "--strict"], { files })).status).toBe(0);
  });

  test("several trials in both ways of writing, and a seed, change nothing here", async () => {
    const more = { ...files, "again.yaml": files["pulse.yaml"].replace("Pulse", "Again") };
    const together = await json(["fit", "tank.yaml", "--trial", "pulse.yaml", "again.yaml"], { files: more });
    const repeated = await json([...command, "--trial", "again.yaml", "--seed", "3"], { files: more });
    expect(at(together.document, "observations")).toBe(80);
    expect(at(repeated.document, "observations")).toBe(80);
  });

  test("progress is for a terminal only, one line written over and wiped", async () => {
    const quiet = await backmix(command, { files });
    expect(quiet.err).toBe("");
    const { err } = await backmix(command, { files, isTerminal: true });
    const wipe = "\r\u001b[2K";
    expect(err.startsWith(`${wipe}fit: start 1 of `)).toBe(true);
    expect(err.endsWith(wipe)).toBe(true);
    expect(err).not.toContain("\n");
  });
});

describe("moments", () => {
  test("keeps the contract", async () => {
    const { status, document } = await json(["moments", "pulse.yaml", "--vessel", "tank.yaml"], { files });
    expect(status).toBe(0);
    for (const key of ["readings", "grade", "findings", "notSupported"]) expect(document).toHaveProperty(key);
    for (const key of "at recovery mean variance skewness t10 t50 t90 indices tail steps curve".split(" ")) {
      expect(at(document, "readings.0")).toHaveProperty(key);
    }
    for (const key of ["morrill", "holdback", "segregation", "tanks"]) {
      expect(at(document, "readings.0.indices")).toHaveProperty(key);
    }
    expect(Object.keys(at(document, "readings.0.mean") as object)).toEqual(["value", "unit", "standardError"]);
    const curve = Object.keys(at(document, "readings.0.curve") as object);
    expect(curve).toEqual(["time", "E", "F", "W", "standardErrorF", "internalAge", "intensity"]);
    expect(at(document, "readings.0.recovery.value")).toBeCloseTo(1, 2);
    expect(at(document, "readings.0.mean.value")).toBeCloseTo(8, 1);
  });

  test("leaves out what needs a flow when none is known, and says so", async () => {
    const { document } = await json(["moments", "pulse.yaml"], { files });
    expect(at(document, "readings.0.recovery")).toEqual({ value: null, unit: "1", why: "not-estimable" });
    expect(String(at(document, "notSupported"))).toContain("recovery at 'product'");
  });

  test("prints figures with their errors", async () => {
    const { out } = await backmix(["moments", "networks/demo/salt-normal.yaml"]);
    expect(out).toMatch(/^ {2}mean +\S+ ± \S+ min$/m);
    expect(out).toMatch(/after cleaning step +area +mean, min/);
  });
});
