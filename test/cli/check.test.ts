import { describe, expect, test } from "vitest";
import { at, backmix, json } from "./fake.js";
import { files } from "./vessels.js";

describe("check", () => {
  test("prints the balance of a sound network", async () => {
    const { status, out } = await backmix(["check", "vessel.yaml"], { files });
    expect(status).toBe(0);
    expect(out).toMatchInlineSnapshot(`
      "vessel.yaml: network, ok

        stream           flow, L/min  written
        feed -> bulk               9  rest
        feed -> product            1  bypass
        bulk -> product            9
        bulk <> corner           1.5  1.5 L/min  exchange

        body    kind     volume, L  through-flow, L/min  space time, min
        bulk    stirred        700                    9            77.78
        corner  stirred        200                  1.5            133.3
        sump    dead           100                    0          no flow

        vessel     1000 L, 100 L of it dead
        feed       10 L/min
        mean time  90 min (active volume over feed)
      "
    `);
  });

  test("gives the balance as JSON in the file's units", async () => {
    const { document } = await json(["check", "vessel.yaml"], { files });
    expect(Object.keys(document)).toEqual(["backmix", "command", "inputs", "ok", "files", "problems"]);
    const network = at(document, "files.0.network") as object;
    expect(Object.keys(network)).toEqual(["flows", "volumes", "spaceTimes", "vessel"]);
    const value = (path: string): number => at(network, `${path}.value`) as number;
    expect(value("flows.feed>bulk")).toBeCloseTo(9, 12);
    expect(value("flows.bulk<>corner")).toBeCloseTo(1.5, 12);
    expect(value("volumes.sump")).toBeCloseTo(100, 12);
    expect(value("spaceTimes.bulk")).toBeCloseTo(700 / 9, 10);
    expect(at(network, "spaceTimes.sump")).toEqual({ value: null, unit: "min", why: "infinite" });
    for (const [key, expected] of Object.entries({ volume: 1000, active: 900, dead: 100, feed: 10, meanTime: 90 })) {
      expect(value(`vessel.${key}`)).toBeCloseTo(expected, 10);
    }
    expect(at(network, "vessel.feed.unit")).toBe("L/min");
  });

  test("prints what it understood of a trial, a duty, a chemistry, a study and a change", async () => {
    const names = ["demo/salt-normal", "heat/cooled", "heat/exothermic", "demo/second-tank", "flask/flask-20"];
    const { status, out } = await backmix(["check", ...names.map((name) => `networks/${name}.yaml`)]);
    expect(status).toBe(0);
    expect(out).toMatchInlineSnapshot(`
      "networks/demo/salt-normal.yaml: trial, ok

        vessel     both.yaml
        flow       feed 40 L/min ± 1 %
        injection  pulse of 3 kg ± 1 % at feed, from 09:14:20 over 2 min
        clock      times of day, written h:m:s

        reading  file             rows  times                 unit          cleaning
        product  salt-normal.csv   781  09:00:00 to 15:30:00  mS/cm -> g/L  drifting baseline, delay 0.5 min, lag 0.2 min, 11 left out

      networks/heat/cooled.yaml: duty, ok

        chemistry    First order, exothermic
        fed by feed  A 3 mol/L, at 25 degC
        heat         tank has a jacket at 20 degC, 400 W/K; all else adiabatic
        reported     conversion of A; temperature at product

      networks/heat/exothermic.yaml: chemistry, ok

        species        A, P
        constant       k = 0.0006 1/min, follows T
        heat capacity  4 kJ/L/K
        temperature    asked for by the rates

        reaction  makes of each  heat
        A -> P    A −1, P +1     -120 kJ/mol

      networks/demo/second-tank.yaml: change, ok

        changes  feeds, compartments

      networks/flask/flask-20.yaml: trial, ok

        vessel       flask.yaml
        chemistry    Hydrolysis of the ester, to be measured
        temperature  20 degC ± 0.2 K
        flask holds  ester 0.05 mol/L ± 0.5 %, base 0.06 mol/L ± 0.5 %
        clock        elapsed, in min

        reading        file          rows  times            unit   cleaning
        base at flask  flask-20.csv    14  0 min to 26 min  mol/L
      "
    `);
  });

  test("of a duty that changes in time it says what goes where, and when", async () => {
    const duty = `duty: A day
format: 1
flows: {raw: {from: 3 L/min, to: 6 L/min, start: 10 min, lasting: 1 h}, dye: {file: pump.csv, time: {column: t, unit: h}, value: {column: Q, unit: L/min}}}
chemistry: c.yaml
heat: adiabatic
feeds:
  raw: {A: {from: 1 mol/L, to: 2 mol/L, start: 90 s}, temperature: {from: 20 degC, to: 35 degC, lasting: 2 min}}
  dye: {A: 0 mol/L, temperature: 20 degC}
`;
    const chemistry =
      "chemistry: Decay\nformat: 1\nspecies: {A: {}}\nconstants: {k: 0.1 1/min}\nreactions: [{makes: {A: -1}, rate: k * A, heat: -1 kJ/mol}]\nmedium: {heat-capacity: 4 kJ/L/K}\n";
    const { out } = await backmix(["check", "day.yaml"], {
      files: { "day.yaml": duty, "c.yaml": chemistry, "pump.csv": "t,Q\n0,0.5\n1,0.7\n2,0.6\n" },
    });
    expect(out).toMatchInlineSnapshot(`
      "day.yaml: duty, ok

        chemistry   Decay
        flow        raw 3 L/min (6 L/min from 10 min to 70 min)
        flow        dye 0.5 L/min (logged, 3 rows to 0.6 L/min at 120 min)
        fed by raw  A 1 mol/L (2 mol/L from 1.5 min on), at 20 degC (35 degC from 0 min to 2 min)
        fed by dye  A 0 mol/L, at 20 degC
        heat        adiabatic
        reported    nothing but the outlets
      "
    `);
  });

  test("of a closed vessel without streams there is no empty table", async () => {
    const flask = "network: Flask\nformat: 1\ncompartments: {flask: {kind: stirred, volume: 1 L}}\n";
    const { out } = await backmix(["check", "flask.yaml"], { files: { "flask.yaml": flask } });
    expect(out).not.toContain("stream");
    expect(out).toContain("nothing enters or leaves");
  });

  test("looks at every file, also after a broken one", async () => {
    const { status, document } = await json(["check", "broken.yaml", "tank.yaml", "nowhere.yaml"], { files });
    expect(status).toBe(1);
    expect((at(document, "files") as unknown as { ok: boolean }[]).map((f) => f.ok)).toEqual([false, true, false]);
    expect(at(document, "problems.0.file")).toBe("broken.yaml");
    expect(at(document, "problems.0.line")).toBe(3);
    expect((at(document, "inputs") as unknown as { path: string }[]).map((i) => i.path)).toEqual([
      "broken.yaml",
      "tank.yaml",
    ]);
  });

  test("shows a problem with its line, mark and fix", async () => {
    const { out } = await backmix(["check", "broken.yaml"], { files });
    expect(out).toContain("broken.yaml: network, 1 error");
    expect(out).toMatch(/broken\.yaml:3:\d+ share-sum: /);
    expect(out).toMatch(/^ {2}3 \| feeds: .*\n {2} {2}\| +\^+$/m);
  });

  test("--format github annotates lines", async () => {
    const { status, out } = await backmix(["check", "broken.yaml", "--format", "github"], { files });
    expect(status).toBe(1);
    expect(out).toMatch(
      /^::error file=broken\.yaml,line=3,endLine=3,col=\d+,endColumn=\d+,title=share-sum::.*110 %25.*; fix: /,
    );
  });

  test("--format sarif prints a log for code scanning", async () => {
    const { status, out } = await backmix(["check", "broken.yaml", "--format", "sarif"], { files });
    expect(status).toBe(1);
    const log = JSON.parse(out);
    expect(at(log, "version")).toBe("2.1.0");
    expect(at(log, "runs.0.results.0.ruleId")).toBe("share-sum");
  });

  test("--format json is --json", async () => {
    const { out } = await backmix(["check", "tank.yaml", "--format", "json"], { files });
    expect(at(JSON.parse(out), "files.0.ok")).toBe(true);
  });
});

describe("draw", () => {
  test("prints an SVG, or writes it", async () => {
    const { out } = await backmix(["draw", "vessel.yaml"], { files });
    expect(out).toMatch(/^<svg [\s\S]*<\/svg>\n$/);
    const { status, written } = await backmix(["draw", "vessel.yaml", "-o", "out/vessel.svg"], { files });
    expect(status).toBe(0);
    expect(written.get("out/vessel.svg")).toBe(out);
  });

  test("a page stands by itself", async () => {
    const { written } = await backmix(["draw", "vessel.yaml", "-o", "vessel.html"], { files });
    expect(written.get("vessel.html")).toMatch(/^<!doctype html>[\s\S]*<svg [\s\S]*<\/html>\n$/);
  });

  test("other values give another picture", async () => {
    const plain = await backmix(["draw", "vessel.yaml"], { files });
    const set = await backmix(["draw", "vessel.yaml", "--set", "bypass=40 %"], { files });
    expect(set.out).not.toBe(plain.out);
    expect(set.out).toMatch(/feed to product 4\sL\/min/);
  });
});
