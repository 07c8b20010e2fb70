import { expect, test } from "vitest";
import { backmix, json } from "./fake.js";

/** A vessel so small that no number holds what is in it as a concentration: the integrator has to give up. Demo. */
const files = {
  "far.yaml": `trial: Far too much
format: 1
injection: {at: feed, pulse: 1e306 kg}
readings: [{at: product}]
`,
  "minute.yaml": `network: A vessel next to nothing
format: 1
feeds: {feed: {flow: 1 L/min, to: speck}}
outlets: [product]
compartments:
  speck: {kind: stirred, volume: 1e-306 L, to: large}
  large: {kind: stirred, volume: 10 L, to: product}
`,
};

test.each([
  ["trial", ["simulate", "minute.yaml", "--trial", "far.yaml", "--engine", "ode", "--until", "10 min"], "speck"],
  ["pulse", ["simulate", "minute.yaml", "--pulse", "feed", "--engine", "ode", "--until", "10 min"], "speck"],
])("an integration that ends early: when, where, why, and what is known: %s", async (_name, args, where) => {
  const { status, err } = await backmix(args, { files });
  expect(status).toBe(3);
  expect(err).toContain(
    `not converged: the integrator stopped 0 s after the start, in ${where}: its tracer is no longer a finite number`,
  );
  const { status: again, document } = await json(args, { files });
  expect(again).toBe(3);
  expect(document).toMatchObject({ ok: false, stopped: expect.stringContaining(`in ${where}`) });
  const text = JSON.stringify(document);
  expect(text).toMatch(/"value":\{[^}]*null,null,null/);
  expect(text).not.toMatch(/NaN|Infinity/);
});

test("a loop of tubes far too quick for the time asked is not begun", async () => {
  const quick = `network: A tank and a quick loop
format: 1
feeds: {feed: {flow: 1 L/min, to: tank}}
outlets: [product]
compartments:
  tank: {kind: stirred, volume: 100 L, to: {loop: 1 L/min, product: rest}}
  loop: {kind: tubular, volume: 1e-6 L, to: tank}
`;
  const args = ["simulate", "quick.yaml", "--pulse", "feed", "--engine", "ode", "--until", "300 min"];
  const { status, err } = await backmix(args, { files: { "quick.yaml": quick } });
  expect(status).toBe(3);
  expect(err).toMatch(
    /loop-too-short: 'loop' delays so little, in a loop, that the ode engine would need about 3e\+8 steps/,
  );
});
