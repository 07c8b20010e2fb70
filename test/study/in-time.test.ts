import { expect, test } from "vitest";
import { compile } from "../../src/compile/compile.js";
import type { Duty } from "../../src/model/duty.js";
import type { Network } from "../../src/model/network.js";
import { parseDuty } from "../../src/parse/duty.js";
import { parseNetwork } from "../../src/parse/network.js";
import { collector } from "../../src/problems/report.js";
import { resolveAim } from "../../src/resolve/aim.js";
import { solveAim } from "../../src/study/aim.js";
import { overTime } from "../../src/study/in-time.js";
import { inputsOf } from "../../src/study/inputs.js";
import { operate } from "../../src/study/operate.js";

/** A tank of 100 L at 10 L/min, tau = 10 min; 1 mol/L jumps to 2 mol/L at 5 min for 4 min, nothing reacts. */
const network = parseNetwork(`network: Tank
format: 1
feeds: {feed: {flow: 10 L/min, to: tank}}
compartments: {tank: {kind: stirred, volume: 100 L, to: out}}
outlets: [out]
`).document as Network;
const duty = parseDuty(`duty: Upset
format: 1
feeds: {feed: {A: {from: 1 mol/L, to: 2 mol/L, start: 5 min, lasting: 4 min}}}
report: [time A at out above 1.2 mol/L, A at out]
`).document as Duty;
const operation = { network, duty, values: {}, kinetics: new Map<string, string>() };

/** c - 1 rises as h (1 - exp(-t/tau)) for 4 min, then falls. */
function off(height: number, limit = 0.2): number {
  const peak = height * (1 - Math.exp(-0.4));
  return peak <= limit ? 0 : 4 + 10 * Math.log(1 - limit / height) + 10 * Math.log(peak / limit);
}

test("time off spec is that of the closed form, beside figures of the steady state", () => {
  const { figures } = operate(operation);
  expect((figures?.[0].value ?? 0) / 60).toBeCloseTo(off(1), 4);
  expect(figures?.[1].value).toBeCloseTo(1000, 6);
});

test("how high an upset may be for a time off spec: the aim put back gives it", () => {
  const { report, problems } = collector();
  const text = "time A at out above 1.2 mol/L <= 6 min";
  const node = { type: "scalar", at: { source: { path: "aim", text }, from: 0, to: text.length }, text } as const;
  const aim = resolveAim({ ...node, plain: true, empty: false }, duty, report);
  const input = inputsOf(operation).find((i) => i.name === "feed.A.to");
  if (!aim || !input)
    throw new Error(JSON.stringify(problems.map((p) => p.message)) + inputsOf(operation).map((i) => i.name));
  const found = solveAim(operation, aim, { input, from: 1000, to: 4000, log: false });
  expect(found.met.length).toBe(1);
  expect(off(found.met[0].to / 1000 - 1)).toBeCloseTo(6, 3);
});

test("the picture runs from the steady state before the upset to a tenth past where 1 % of its peak is left", () => {
  const { plant } = compile(network);
  const run = plant && overTime(plant, duty);
  const values = run?.run.outlets[0].values ?? [];
  const times = run?.run.times ?? [];
  expect(values[0]).toBeCloseTo(1000, 6);
  // It peaks at 9 min and falls by 1/e in 10 min: 1 % of the peak is left at 9 + 10 ln 100 = 55.05 min.
  const end = 1.1 * (9 + 10 * Math.log(100));
  expect(times[times.length - 1] / 60).toBeCloseTo(end, 3);
  const left = (1 - Math.exp(-0.4)) * Math.exp(-(end - 9) / 10);
  expect(values[values.length - 1]).toBeCloseTo(1000 * (1 + left), 3);
  expect(Math.max(...values) / 1000).toBeCloseTo(1 + 1 - Math.exp(-0.4), 2);
});
