import { readFileSync } from "node:fs";
import { expect, test } from "vitest";
import { fit } from "../../src/fit/fit.js";
import { parseNetwork } from "../../src/parse/network.js";
import { parseTrial } from "../../src/parse/trial.js";
import { trialResponse } from "../../src/simulate/trial.js";
import { plantOf } from "../simulate/plants.js";

/** A mixing test: salt into the flask of the tour's closed loop, read behind its pump. Demo data, without noise. */
test("a mixing test of a closed vessel gives hold-up and exchange back that made it", () => {
  const text = readFileSync("networks/tour/loop.yaml", "utf8").replace("value: 2 L/min", "value: 3 L/min");
  const truth = { quiet: 2.6e-3, renewal: 0.3e-3 / 60 };
  const draft = parseTrial(
    "trial: T\nformat: 1\ninjection: {at: flask, pulse: 5 g}\nreadings: [{at: loop}]\n",
  ).document;
  const { document: network } = parseNetwork(text);
  if (!draft || !network) throw new Error("no documents");
  const time = Float64Array.from({ length: 16 }, (_, i) => 60 * (0.2 + 0.5 * i));
  const [curve] = trialResponse(plantOf(text, truth), draft, [{ time }]);
  const rows = Array.from(time, (t, i) => `${t / 60},${curve[i]}`).join("\n");
  const { document: trial } = parseTrial(
    "trial: T\nformat: 1\ninjection: {at: flask, pulse: 5 g, start: 0 min}\nreadings: [{at: loop, file: a.csv, time: {column: t, unit: min}, value: {column: c, unit: g/L}}]\n",
    { path: "t.yaml", read: () => `t,c\n${rows}\n` },
  );
  if (!trial) throw new Error("no trial");
  const { fit: found } = fit(network, [trial], { free: ["quiet", "renewal"], starts: 0 });
  for (const p of found?.parameters ?? []) {
    expect(p.value / truth[p.name as keyof typeof truth]).toBeCloseTo(1, 4);
  }
  expect(found?.parameters.length).toBe(2);
});
