import { expect, test } from "vitest";
import { backmix, json } from "./fake.js";

const network = (body: string): string => `network: One body
format: 1
feeds: {feed: {flow: 10 L/min, to: body}}
compartments:
  body: {${body}, to: product}
outlets: [product]
`;
const chemistry = (rate: string, k: string): string =>
  `chemistry: A goes\nformat: 1\nspecies: {A: {}}\nconstants: {k: ${k}}\nreactions: [{makes: {A: -1}, rate: "${rate}"}]\n`;
const duty = "duty: Normal\nformat: 1\nchemistry: chemistry.yaml\nfeeds: {feed: {A: 1 mol/L}}\n";

const files = {
  "chain.yaml": network("kind: stirred, repeat: 3, volume: 30 L"),
  "steep.yaml": network("kind: dispersed, peclet: 1e6, volume: 100 L"),
  "long.yaml": network("kind: stirred, repeat: 400, backflow: 50 L/min, volume: 30 L"),
  "chemistry.yaml": chemistry("k * A", "1 1/min"),
  "duty.yaml": duty,
};
const zeroOrder = { ...files, "chemistry.yaml": chemistry("k", "0.3 mol/L/min") };

test("-o writes what leaves every node, members included", async () => {
  const { status, out, written } = await backmix(["simulate", "chain.yaml", "--duty", "duty.yaml", "-o", "cells.csv"], {
    files,
  });
  expect(status).toBe(0);
  expect(out).toContain("concentrations: cells.csv");
  const [header, ...rows] = (written.get("cells.csv") ?? "").trim().split("\n");
  expect(header).toBe("leaving,A [mol/L]");
  expect(rows.map((row) => row.split(",")[0])).toEqual(["feed", "body.1", "body.2", "body.3", "product"]);
  rows
    .map((row) => Number(row.split(",")[1]))
    .forEach((c, i) => {
      expect(c).toBeCloseTo([1, 1 / 2, 1 / 4, 1 / 8, 1 / 8][i], 12);
    });
  const { document } = await json(["simulate", "chain.yaml", "--duty", "duty.yaml", "-o", "cells.csv"], { files });
  expect(document).toMatchObject({ written: "cells.csv", converged: true });
  expect(document.conserved).toBe(0);
});

test("what cannot be solved ends with 3, names the compartment, and gives the best found", async () => {
  const args = ["simulate", "steep.yaml", "--duty", "duty.yaml"];
  const { status, out, err } = await backmix(args, { files: zeroOrder });
  expect(status).toBe(3);
  expect(err).toContain("the steady state did not converge, worst for A in body; the best found is printed");
  expect(out).toContain("(not converged: best found)");
  const { document } = await json(args, { files: zeroOrder });
  expect(document).toMatchObject({
    ok: false,
    converged: false,
    worst: { node: "body", species: "A" },
    residual: null,
  });
});

test("many nodes that feed one another: a terminal sees how far they are", async () => {
  const { status, err } = await backmix(["simulate", "long.yaml", "--duty", "duty.yaml"], {
    files,
    isTerminal: true,
  });
  expect(status).toBe(0);
  expect(err).toMatch(/simulate: 400 nodes solved together, balances within [\d.e-]+/);
});

test("options that say nothing about a duty are told", async () => {
  const { status, err } = await backmix(["simulate", "chain.yaml", "--duty", "duty.yaml", "--until", "1 h"], { files });
  expect(status).toBe(2);
  expect(err).toContain("--until says nothing about the steady state of a duty");
});

const warm = {
  "tank.yaml": network("kind: stirred, volume: 100 L").replace("10 L/min", "100 L/min"),
  "chemistry.yaml": `chemistry: A goes, and warms
format: 1
species: {A: {}}
constants: {k: {at: 350 K, value: 1 1/min, activation: 72.75 kJ/mol}}
reactions: [{makes: {A: -1}, rate: k * A, heat: -50 kJ/mol}]
medium: {heat-capacity: 0.239 kJ/L/K}
`,
  "duty.yaml": `duty: Jacketed
format: 1
chemistry: chemistry.yaml
feeds: {feed: {A: 1 mol/L, temperature: 350 K}}
heat: {body: {jacket: 300 K, conductance: 833.333 W/K}}
report: [conversion of A, temperature at product]
`,
};

test("heat: temperatures, where the heat goes, all steady states with their stability, and the caution", async () => {
  const { status, out, written } = await backmix(["simulate", "tank.yaml", "--duty", "duty.yaml", "-o", "x.csv"], {
    files: warm,
  });
  expect(status).toBe(0);
  expect(out).toMatch(/leaving +A, mol\/L +temperature, K\n/);
  expect(out).toMatch(
    /heat +reactions set free 10\.23 kW, the jacket of body takes out 20\.4 kW, the streams carry in/,
  );
  expect(out).toContain("3 steady states found from many starts");
  expect(out).toMatch(/1 \* +12\.28 % +324\.5 K +stable: fades e-fold in/);
  expect(out).toMatch(/2 +50 % +350 K +unstable: grows e-fold in 0\.35 min/);
  expect(out).toContain("do not use this for relief sizing or interlock");
  expect(written.get("x.csv")?.split("\n")[0]).toBe("leaving,A [mol/L],temperature [K]");
  const { document } = await json(["simulate", "tank.yaml", "--duty", "duty.yaml"], { files: warm });
  const states = document.steadyStates as unknown as {
    stable: boolean;
    fromFeed: boolean;
    report: { value: number }[];
  }[];
  expect(states.map((s) => [s.stable, s.fromFeed])).toEqual([
    [true, true],
    [false, false],
    [false, false],
  ]);
  expect(states[1].report[1].value).toBeCloseTo(350, 2);
  expect(document).toMatchObject({
    outlets: { product: { temperature: { unit: "K" } } },
    compartments: { body: { temperature: { unit: "K" } } },
    heat: { released: { unit: "kW" }, walls: { body: { unit: "kW" } } },
  });
});

test("--along writes the mixture along what it flows through, as numbers or as a picture", async () => {
  const tube = { ...files, "tube.yaml": network("kind: tubular, volume: 10 L") };
  const ask = (along: string, vessel = "tube.yaml") =>
    backmix(["simulate", vessel, "--duty", "duty.yaml", "--along", along], { files: tube });
  const { status, out, written } = await ask("along.csv");
  expect(status).toBe(0);
  expect(out).toContain("along the bodies: along.csv");
  const [header, ...rows] = (written.get("along.csv") ?? "").trim().split("\n");
  expect(header).toBe("body,share of its volume passed,A [mol/L]");
  for (const [body, share, c] of rows.map((row) => row.split(","))) {
    expect(body).toBe("body");
    expect(Number(c)).toBeCloseTo(Math.exp(-Number(share)), 10);
  }
  expect((await ask("along.svg")).written.get("along.svg")).toContain("volume of body passed, L");
  expect((await ask("along.csv", "chain.yaml")).err).toContain("no body of this network has a line along it");
  expect((await ask("along.txt")).err).toContain("write to .csv, .svg or .png");
  expect(
    (await backmix(["simulate", "tube.yaml", "--pulse", "feed", "--along", "a.csv"], { files: tube })).status,
  ).toBe(2);
});

test("--states: all steady states over a range of one input, where they end, and how far that is from now", async () => {
  const args = ["simulate", "tank.yaml", "--duty", "duty.yaml", "--states", "feed.temperature=300 K..400 K"];
  const { status, out, written } = await backmix([...args, "-o", "s.svg"], { files: warm });
  expect(status).toBe(0);
  expect(out).toMatch(/356\.8 K +ignites as it rises +\+6\.752 K/);
  expect(out).toMatch(/nearest +feed\.temperature up to 356\.8 K: ignites as it rises/);
  expect(out).toContain("do not use this for relief sizing or interlock");
  expect(written.get("s.svg")).toContain("<svg");
  const csv = await backmix([...args, "-o", "s.csv"], { files: warm });
  const [header, ...rows] = (csv.written.get("s.csv") ?? "").trim().split("\n");
  expect(header).toBe("branch,feed.temperature [K],stable,conversion of A [1],temperature at product [K]");
  expect(rows.length).toBeGreaterThan(50);
  const { document } = await json(args, { files: warm });
  expect(document).toMatchObject({
    ok: true,
    statesOver: { name: "feed.temperature", next: { rising: { what: "ignites" }, falling: null } },
  });
  const wrong = await backmix(["simulate", "tank.yaml", "--duty", "duty.yaml", "--states", "feed.heat=1 K..2 K"], {
    files: warm,
  });
  expect(wrong.status).toBe(2);
  expect(wrong.err).toContain("--states: there is no 'feed.heat'");
});

test("where a zero-order law has used a reactant up nothing is left of it, and an infinite kill is said to be one", async () => {
  const own = {
    ...zeroOrder,
    "tank.yaml": network("kind: stirred, volume: 100 L"),
    "many.yaml": network("kind: stirred, repeat: 3, volume: 60 L"),
    "duty.yaml": `${duty}report: [log-removal of A, A at product]\n`,
  };
  for (const vessel of ["tank.yaml", "many.yaml"]) {
    const { document } = await json(["simulate", vessel, "--duty", "duty.yaml"], { files: own });
    expect(document).toMatchObject({ report: [{ value: null, why: "infinite" }, { value: 0 }] });
    const { out } = await backmix(["simulate", vessel, "--duty", "duty.yaml"], { files: own });
    expect(out.replace(/\s+/g, " ")).toContain(
      "log-removal of A: infinite, since in this model nothing at all of it leaves",
    );
  }
  // What a first-order law leaves is a result, however little.
  const fast = { ...own, "chemistry.yaml": chemistry("k * A", "1e14 1/min") };
  const { document } = await json(["simulate", "tank.yaml", "--duty", "duty.yaml"], { files: fast });
  expect(Number(document.report[0].value)).toBeCloseTo(15, 6);
  const series = await json(["simulate", "many.yaml", "--duty", "duty.yaml"], {
    files: { ...own, "chemistry.yaml": chemistry("k * A", "1e7 1/min") },
  });
  expect(Number(series.document.report[0].value)).toBeCloseTo(3 * Math.log10(2e7 + 1), 6);
});

test("the same at the end of a start-up", async () => {
  const own = {
    ...zeroOrder,
    "tank.yaml": network("kind: stirred, volume: 100 L"),
    "duty.yaml": `${duty}report: [log-removal of A]\n`,
  };
  const { document } = await json(["simulate", "tank.yaml", "--duty", "duty.yaml", "--transient"], { files: own });
  expect(document).toMatchObject({ report: [{ value: null, why: "infinite" }] });
});

test("bounds of mixing are not told where what is fed does not react by itself: cells that nobody feeds", async () => {
  const monod = (rate: string): string =>
    `chemistry: Cells\nformat: 1\nspecies: {S: {}, X: {}}\nconstants: {mu: 0.5 1/min, ks: 0.1 g/L}\nreactions: [{makes: {S: -2, X: 1}, rate: "${rate}"}]\n`;
  const own = {
    "tank.yaml": network("kind: stirred, volume: 100 L"),
    "duty.yaml": `${duty.replace("A: 1 mol/L", "S: 10 g/L")}report: [conversion of S]\n`,
  };
  const grown = { ...own, "chemistry.yaml": monod("mu * S / (ks + S) * X") };
  const { out } = await backmix(["simulate", "tank.yaml", "--duty", "duty.yaml"], { files: grown });
  expect(out).not.toContain("All rates are of first order");
  expect(out).not.toContain("if segregated");
  expect(out).toContain("what is fed does not react by itself");
  // A first-order law is one, also where nothing of its reactant is fed.
  const linear = {
    ...own,
    "chemistry.yaml": chemistry("k * A", "1 1/min"),
    "duty.yaml": `${duty.replace("1 mol/L", "0 mol/L")}report: [A at product]\n`,
  };
  const other = await backmix(["simulate", "tank.yaml", "--duty", "duty.yaml"], { files: linear });
  expect(other.out).toContain("All rates are of first order");
});

test("a rate constant below zero that a duty sets is an error, in the place where it holds", async () => {
  const oneWay = files["chemistry.yaml"]
    .replace("makes: {A: -1}", "equation: A -> P")
    .replace("{A: {}}", "{A: {}, P: {}}");
  const own = {
    "tank.yaml": network("kind: stirred, volume: 100 L"),
    "chemistry.yaml": oneWay,
    "duty.yaml": `${duty}local: {body: {k: -1 1/min}}\n`,
  };
  const { status, err } = await backmix(["simulate", "tank.yaml", "--duty", "duty.yaml"], { files: own });
  expect(status).toBe(1);
  expect(err).toContain("duty.yaml:5:16 rate-backwards: with k = −1 1/min, 'A -> P' would run backwards");
});
