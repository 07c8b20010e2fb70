import { expect, test } from "vitest";
import { thresholds } from "../../src/data/thresholds.js";
import { fit } from "../../src/fit/fit.js";
import type { Network } from "../../src/model/network.js";
import { random } from "../../src/numerics/random.js";
import { parseNetwork } from "../../src/parse/network.js";
import { clock, exactCurve, noisy, readLog, vessels } from "./simulated.js";

const codes = [
  "bypass",
  "slow-exchange",
  "intensity-falls",
  "loop",
  "parallel-paths",
  "tube-then-tank",
  "near-plug",
  "well-mixed",
];
const draws = 10;
const folder = "../../shared/reference/measured";

/** How often each finding is told of curves with known truth. The page is made anew by `npx vitest run test/data/measured -u`. */
test("findings: how often they are told where they are true, and where they are not", async () => {
  const rows: string[] = [];
  const rates = { hit: [] as number[], alarm: [] as number[] };
  for (const share of [0.003, 0.02]) {
    for (const vessel of vessels) {
      const curve = exactCurve(vessel);
      const noise = random(97);
      const told = new Map<string, number>();
      for (let d = 0; d < draws; d++) {
        const { result } = readLog(noisy(curve, share, noise));
        for (const { code } of result.findings) told.set(code, (told.get(code) ?? 0) + 1);
      }
      const cells = codes.map((code) => {
        const rate = Math.round((100 * (told.get(code) ?? 0)) / draws);
        const isTrue = vessel.true.includes(code);
        rates[isTrue ? "hit" : "alarm"].push(rate);
        return isTrue ? `**${rate}**` : String(rate);
      });
      rows.push(`| ${vessel.name} | ${100 * share} % | ${cells.join(" | ")} |`);
    }
  }
  const mean = (v: readonly number[]): number => v.reduce((a, b) => a + b, 0) / v.length;
  const page = `### How often findings are right

Curves with known truth: ${vessels.length} vessels of 100 L at 1 L/min, a pulse read every 2 min for nine mean times with white noise of a share of the
peak, ${draws} draws each (test/data/measured.test.ts, seed 97; thresholds version ${thresholds.version}). Cells: of 100 curves, in how many the finding is told; bold where it
is true of the vessel. Over all: told where true ${mean(rates.hit).toFixed(0)} of 100, told where not true ${mean(rates.alarm).toFixed(1)} of 100.
White noise and pulses only: logs whose errors hang together, and steps, are held by test/data/errors-hold.test.ts.

| vessel | noise | ${codes.join(" | ")} |
|---|---|${codes.map(() => "--:").join("|")}|
${rows.join("\n")}
`;
  expect(mean(rates.alarm)).toBeLessThan(5);
  expect(mean(rates.hit)).toBeGreaterThan(70);
  await expect(page).toMatchFileSnapshot(`${folder}/findings.md`);
});

const corner = parseNetwork(`network: A tank with a quiet fifth
format: 1
parameters: {active: {value: 90 L, between: [50 L, 200 L]}, held: {value: 30 L, between: [2 L, 45 L]}, renewal: {value: 0.1 L/min, between: [0.005 L/min, 1 L/min], spacing: log}}
feeds: {feed: {flow: 1 L/min, to: bulk}}
compartments:
  bulk: {kind: stirred, volume: active - held, to: product, exchange: {quiet: renewal}}
  quiet: {kind: stirred, volume: held}
outlets: [product]
`).document as Network;

/** What a plain sum over the log makes of the mean, s; what `moments` makes of it; what a fit makes of the active volume, m3. */
function three(values: Float64Array, shown: Float64Array, more: string) {
  const { trial, result } = readLog(values, more, {}, shown);
  const [reading] = result.readings;
  const plain = reading.steps[reading.steps.length - 2].mean;
  const { fit: found } = fit(corner, [trial], { starts: 0 });
  const active = found?.parameters.find((p) => p.name === "active");
  const [low, high] = active?.interval95 ?? [Number.NaN, Number.NaN];
  return {
    plain: (plain ?? Number.NaN) / 6000,
    moments: (reading.mean.value ?? Number.NaN) / 6000,
    fit: (active?.value ?? Number.NaN) / 0.1,
    held: low <= 0.1 && high >= 0.1,
  };
}

/** The true mean is 100 min, the true active volume 100 L. The page is made anew by `npx vitest run test/data/measured -u`. */
test("bias: a fit stays true where the moments of a short, drifting or noisy log do not", async () => {
  const known = vessels.find((v) => v.name.includes("quiet fifth"));
  if (!known) throw new Error("no such vessel");
  const curve = exactCurve(known);
  const peak = curve.reduce((m, c) => Math.max(m, c), 0);
  const versions: { name: string; until: number; noise: number; drift: number }[] = [
    { name: "nine mean times, noise 0.3 % of the peak", until: 900, noise: 0.003, drift: 0 },
    { name: "stopped at five mean times", until: 500, noise: 0.003, drift: 0 },
    { name: "stopped at three mean times", until: 300, noise: 0.003, drift: 0 },
    { name: "noise 1 % of the peak", until: 900, noise: 0.01, drift: 0 },
    { name: "a drift of 3 % of the peak over nine mean times", until: 900, noise: 0.003, drift: 0.03 },
    { name: "the drift, and stopped at five", until: 500, noise: 0.003, drift: 0.03 },
  ];
  const runs = 8;
  const rows: string[] = [];
  let worst = 0;
  for (const { name, until, noise, drift } of versions) {
    const draw = random(29);
    const keep = [...clock.keys()].filter((i) => clock[i] <= until && i % 2 === 0);
    const shown = Float64Array.from(keep, (i) => clock[i]);
    const found = Array.from({ length: runs }, () => {
      const logged = Float64Array.from(
        keep,
        (i) => curve[i] + peak * (noise * draw.normal() + (drift * clock[i]) / 900),
      );
      return three(logged, shown, drift > 0 ? ", baseline: drift" : "");
    });
    const show = (of: "plain" | "moments" | "fit"): string => {
      const told = found.map((f) => f[of]).filter(Number.isFinite);
      if (told.length < runs / 2) return "not told";
      const mean = told.reduce((a, b) => a + b, 0) / told.length;
      const sd = Math.sqrt(told.reduce((s, v) => s + (v - mean) ** 2, 0) / (told.length - 1));
      if (of === "fit") worst = Math.max(worst, Math.abs(mean - 1) / (sd / Math.sqrt(told.length)));
      return `${(100 * (mean - 1)).toFixed(1)} ± ${(100 * sd).toFixed(1)}`;
    };
    const [plain, moments, fitted] = [show("plain"), show("moments"), show("fit")];
    rows.push(`| ${name} | ${plain} | ${moments} | ${fitted} | ${found.filter((f) => f.held).length} of ${runs} |`);
  }
  const page = `### What shortness, drift and noise do to a mean, and to a fit

A tank of 80 L with a quiet 20 L that trades 0.05 of the flow with it, mean 100 min; ${runs} draws each, read every 4 min (test/data/measured.test.ts, seed 29).
Bias and scatter in % of the truth: of the mean by a plain sum over the cleaned log, of the mean by \`moments\` (tail and baseline told together), and of the active
volume by a fit of the true network, all three of its parameters free; last, how often the fit's 95 % interval holds the truth.

| log | plain sum, % | \`moments\`, % | fit, % | interval holds |
|---|--:|--:|--:|--:|
${rows.join("\n")}
`;
  // No bias of the fit that eight draws could tell.
  expect(worst).toBeLessThan(3.5);
  await expect(page).toMatchFileSnapshot(`${folder}/bias.md`);
});
