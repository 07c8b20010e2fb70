import { expect, test } from "vitest";
import { backmix, json } from "./fake.js";
import { files as vessels } from "./vessels.js";

const network = `network: Dispersed
format: 1
parameters: {size: {value: 100 L, between: [10 L, 1000 L]}}
feeds: {feed: {flow: 10 L/min, to: bulk}}
compartments:
  bulk: {kind: dispersed, volume: size, peclet: 0.5, to: product}
outlets: [product]
`;
const files = {
  ...vessels,
  "dispersed.yaml": network,
  "duty.yaml": "duty: Normal\nformat: 1\nfeeds: {feed: {}}\n",
  "study.yaml":
    "study: One\nformat: 1\nrivals: [tank.yaml, dispersed.yaml]\ntrials: [pulse.yaml]\nduties: [duty.yaml]\n",
};

test.each([[["simulate", "dispersed.yaml", "--trial", "pulse.yaml", "--engine", "exact"]]])(
  "%j refuses a body that it does not carry, with its place",
  async (args) => {
    const { status, err } = await backmix(args, { files });
    expect(err).toContain("dispersed.yaml:6:3 not-carried: 'bulk' is axial dispersion");
    expect(status).toBe(1);
    const { document } = await json(args, { files });
    expect(document).toMatchObject({ ok: false, problems: [{ code: "not-carried", line: 6, column: 3 }] });
  },
);

test.each([
  [["simulate", "dispersed.yaml", "--pulse", "feed"]],
  [["simulate", "dispersed.yaml", "--trial", "pulse.yaml"]],
  [["simulate", "tank.yaml", "--pulse", "feed", "--engine", "laplace"]],
])("%j is done by the laplace engine", async (args) => {
  const { status, document } = await json(args, { files });
  expect(document).toMatchObject({ ok: true, engine: "laplace" });
  expect(status).toBe(0);
});

test("laplace is checked by the ode engine", async () => {
  const { document } = await json(["simulate", "tank.yaml", "--pulse", "feed", "--engine", "laplace", "--verify"], {
    files,
  });
  expect(document).toMatchObject({ verify: { engines: ["laplace", "ode"] } });
  const largestDifference = Number(document.verify.largestDifference);
  expect(largestDifference).toBeGreaterThan(0);
  expect(largestDifference).toBeLessThan(1e-9);
});

test("a duty reacts in it, and a study predicts with it as a rival", async () => {
  const chemistry =
    "chemistry: A goes\nformat: 1\nspecies: {A: {}}\nconstants: {k: 1 1/min}\nreactions: [{makes: {A: -1}, rate: k * A}]\n";
  const duty =
    "duty: Normal\nformat: 1\nchemistry: chemistry.yaml\nfeeds: {feed: {A: 1 mol/L}}\nreport: [conversion of A]\n";
  const reacting = { ...files, "chemistry.yaml": chemistry, "duty.yaml": duty };
  const one = await json(["simulate", "dispersed.yaml", "--duty", "duty.yaml"], { files: reacting });
  expect(one.document).toMatchObject({ ok: true, converged: true, report: [{ name: "conversion of A" }] });
  const study = { ...reacting, "study.yaml": files["study.yaml"].replace("tank.yaml, ", "") };
  const { status, document } = await json(["study", "study.yaml", "--starts", "1"], { files: study });
  expect(status).toBe(0);
  expect(document.predictions).toMatchObject([{ name: "conversion of A", value: expect.any(Number) }]);
});

test("check and draw take it", async () => {
  expect((await backmix(["check", "dispersed.yaml"], { files })).status).toBe(0);
  expect((await backmix(["draw", "dispersed.yaml", "-o", "a.svg"], { files })).status).toBe(0);
});
