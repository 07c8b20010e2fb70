import { expect, test } from "vitest";
import { fit } from "../../src/fit/fit.js";
import { withKinetics } from "../../src/fit/kinetics.js";
import { random } from "../../src/numerics/random.js";
import { parseDuty } from "../../src/parse/duty.js";
import { drawsOf } from "../../src/study/draws-of.js";
import { operate } from "../../src/study/operate.js";
import { operationOf } from "../../src/study/operation.js";
import { sampleOf } from "../../src/study/sample.js";
import { spreadsOf } from "../../src/study/spread-shares.js";
import { files, flaskTrial, left, table, tank } from "../fit/reaction-documents.js";

const noise = random(8);
const times = Array.from({ length: 12 }, (_, i) => 0.5 * i);
const trials = [25, 45].map((celsius) =>
  flaskTrial(
    celsius,
    table(times, (t) => left(t, celsius + 273.15, 2, 50) + 0.01 * noise.normal()),
  ),
);
const network = tank("{bypass: {value: 10 %, between: [0 %, 60 %]}}");
const duty = (more = "") =>
  parseDuty(
    `duty: Plant
format: 1
chemistry: second.yaml
${more}feeds: {feed: {A: 1 mol/L ± 1 %, B: 1.2 mol/L}}
temperature: 35 degC
report: [conversion of A]
`,
    { read: (path) => files[path] },
  ).document;

/** A tank at second order by bisection: Q (a - x) = V k x (b - a + x), with a bypass beside it. */
function conversion(k25: number, activation: number): number {
  const k = k25 * Math.exp(((activation * 1000) / 8.314462618) * (1 / 298.15 - 1 / 308.15));
  const tau = 10 / 0.9;
  let [low, high] = [0, 1];
  for (let i = 0; i < 80; i++) {
    const x = (low + high) / 2;
    if (1 - x > tau * k * x * (0.2 + x)) low = x;
    else high = x;
  }
  return 0.9 * (1 - low);
}

test("what a flask told of the kinetics goes into the duty of the plant, with what it left open", () => {
  const { fit: found } = fit(network, trials, { free: ["k25", "E"] });
  if (!found) throw new Error("no fit");
  const plant = duty();
  if (!plant) throw new Error("no duty");
  const operation = operationOf(network, found, trials, plant);
  const value = (name: string): number => found.parameters.find((p) => p.name === name)?.value ?? Number.NaN;
  const expected = conversion((value("k25") / 1e-3) * 60, value("E") / 1000);
  expect(operate(operation).figures?.[0].value).toBeCloseTo(expected, 9);
  const sample = sampleOf(operation, drawsOf(withKinetics(network, trials), found, 200, 1).settings, 1);
  const [spread] = spreadsOf(operation, found, sample.rows, sample.values);
  const fitted = spread?.drivers.find((d) => d.kind === "fit");
  expect(fitted?.duty).toEqual(["E", "k25"]);
  expect(fitted?.share).toBeGreaterThan(0.01);
  expect(fitted?.share).toBeCloseTo(fitted?.linear ?? 0, 1.5);
  expect(spread?.linearSd).toBeCloseTo(spread?.sd ?? 0, 3);
});

test("what the duty sets itself comes first", () => {
  const { fit: found } = fit(network, trials, { free: ["k25", "E"] });
  const plant = duty("with: {k25: 3 L/mol/min, E: 45 kJ/mol}\n");
  if (!found || !plant) throw new Error("no fit");
  const operation = operationOf(network, found, trials, plant);
  expect(operate(operation).figures?.[0].value).toBeCloseTo(conversion(3, 45), 9);
  expect(operation.kinetics.size).toBe(0);
});
