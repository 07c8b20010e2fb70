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
