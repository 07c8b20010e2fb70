import { describe, expect, test } from "vitest";
import { files, left, table } from "../fit/reaction-documents.js";
import { at, backmix, json } from "./fake.js";

const run = {
  ...files,
  "run.csv": table([0, 1, 2, 3, 4, 6], (t) => left(t, 298.15, 2, 50) + 0.01 * Math.sin(9 * t)),
  "run.yaml": `trial: Flask
format: 1
chemistry: second.yaml
vessel: flask.yaml
temperature: 25 degC
contents: {flask: {A: 1 mol/L, B: 1.2 mol/L}}
readings: [{at: flask, of: A, file: run.csv, time: {column: t, unit: min}, value: {column: c, unit: mol/L}}]
`,
  "tank.yaml":
    "network: Tank\nformat: 1\nfeeds: {feed: {flow: 1 L/min, to: pot}}\ncompartments: {pot: {kind: stirred, volume: 9 L, to: out}}\noutlets: [out]\n",
};

describe("fit of a reaction", () => {
  test("tells the rate constant in its own unit, and every file that it rests on", async () => {
    const { status, document } = await json(["fit", "flask.yaml", "--trial", "run.yaml", "--free", "k25"], {
      files: run,
    });
    expect(status).toBe(0);
    expect(at(document, "parameters.k25.unit")).toBe("L/mol/min");
    expect(at(document, "parameters.k25.value")).toBeGreaterThan(1.7);
    const inputs = at(document, "inputs") as unknown as { path: string }[];
    expect(inputs.map((i) => i.path).sort()).toEqual(["flask.yaml", "run.csv", "run.yaml", "second.yaml"]);
  });

  test("a flask keeps its own vessel, whatever network is fitted", async () => {
    const [own, other] = await Promise.all(
      ["flask.yaml", "tank.yaml"].map((vessel) =>
        json(["fit", vessel, "--trial", "run.yaml", "--free", "k25"], { files: run }),
      ),
    );
    expect(at(other.document, "parameters.k25.value")).toBe(at(own.document, "parameters.k25.value"));
  });

  test("at one temperature an activation energy cannot be told, and the fit says so", async () => {
    const { out } = await backmix(["fit", "flask.yaml", "--trial", "run.yaml"], { files: run });
    expect(out).toContain("cannot-tell");
  });

  test("a constant is no parameter, and the names that are ones are told", async () => {
    const { status, err } = await backmix(["fit", "flask.yaml", "--trial", "run.yaml", "--free", "k"], { files: run });
    expect(status).toBe(2);
    expect(err).toContain("k25");
  });

  test.each([
    ["moments", "run.yaml"],
    ["simulate", "flask.yaml", "--trial", "run.yaml"],
    ["plan", "flask.yaml", "--trial", "run.yaml"],
  ])("%s is of tracers", async (...command) => {
    const { status, document } = await json(command, { files: run });
    expect(status).toBe(1);
    expect(at(document, "problems.0.code")).toBe("trial-of-reaction");
  });
});
