import { describe, expect, test } from "vitest";
import { readMoments } from "../../src/data/moments.js";
import { shapeCodes } from "../../src/data/shape-rules.js";
import { parseNetwork } from "../../src/parse/network.js";
import { parseTrial } from "../../src/parse/trial.js";
import { vesselFacts } from "../../src/study/trial-facts.js";
import { codesOf, sampled } from "./helpers.js";

const network = (feeds: string, to: string, outlets: string) => {
  const text = `network: Tank
format: 1
feeds: ${feeds}
compartments: {tank: {kind: stirred, volume: 20 L, to: ${to}}}
outlets: ${outlets}
`;
  const { document, problems } = parseNetwork(text, { path: "network.yaml" });
  if (!document) throw new Error(problems.map((p) => p.message).join("\n"));
  return document;
};

const split = network("{feed: {flow: 10 L/min, to: tank}}", "{top: 30 %, bottom: rest}", "[top, bottom]");

/** The stirred tank's own curve, 10 g into 20 L at 10 L/min, read at some places. */
function read(places: readonly string[], of = split, injection = "pulse: 10 g", factor = 1) {
  const text = `trial: Made for a test
format: 1
injection: {at: feed, ${injection}}
readings:
${places.map((at) => `  - {at: ${at}, file: log.csv, time: {column: t, unit: min}, value: {column: c, unit: g/L}}`).join("\n")}
`;
  const rise = injection.startsWith("step");
  const curve = (t: number) => (rise ? -Math.expm1(-t / 2) : 0.5 * Math.exp(-t / 2)) * factor;
  const csv = `t,c\n${sampled(curve, 30, 3000)
    .map((p) => p.join(","))
    .join("\n")}`;
  const { document, problems } = parseTrial(text, { path: "trial.yaml", read: () => csv });
  if (!document) throw new Error(problems.map((p) => p.message).join("\n"));
  const result = readMoments(document, vesselFacts(of, document));
  return {
    ...result,
    codes: codesOf(result),
    first: result.readings[0],
    findings: result.findings.filter((f) => !shapeCodes.has(f.code)),
  };
}

describe("several outlets", () => {
  test("one of them: recovery against its share of the flow, and no figure that needs all of the vessel", () => {
    const { first, codes, notSupported, grade } = read(["top"]);
    expect(first.recovery.value).toBeCloseTo(0.3, 3);
    expect(first.expected).toBeCloseTo(0.3, 9);
    expect(codes).toEqual([]);
    expect(Object.keys(first.indices)).toEqual(["morrill", "tanks", "peclet"]);
    expect(notSupported.join()).toContain("liquid leaves by bottom, too");
    expect(grade).toBe("A");
  });

  test("less than that share is told, with the outlets that were not measured", () => {
    const { findings } = read(["top"], split, "pulse: 10 g", 0.8);
    expect(findings.map((f) => f.code)).toEqual(["recovery-low"]);
    expect(findings[0].evidence).toBe("recovery 24 %, 30 % of the flow leaves here; not measured: bottom");
  });

  test("all of them: their recoveries are judged together", () => {
    expect(read(["top", "bottom"]).codes).toEqual([]);
    const low = read(["top", "bottom"], split, "pulse: 10 g", 0.8);
    expect(low.findings.map((f) => [f.code, f.at, f.evidence])).toEqual([
      ["recovery-low", "all outlets", "recovery 80 %"],
    ]);
  });
});

describe("several feeds", () => {
  const two = network("{feed: {flow: 4 L/min, to: tank}, wash: {flow: 6 L/min, to: tank}}", "out", "[out]");

  test("effective volume by the flow of all feeds, in the unit of the vessel", () => {
    const { first } = read(["out"], two);
    expect(first.indices["effective-volume"].value).toBeCloseTo(0.02, 4);
    expect(first.indices["mean-over-tau"].value).toBeCloseTo(1, 3);
    const cubic = parseNetwork(
      "network: Tank\nformat: 1\nfeeds: {feed: {flow: 0.6 m3/h, to: tank}}\ncompartments: {tank: {kind: stirred, volume: 0.02 m3, to: out}}\noutlets: [out]\n",
    ).document;
    expect(cubic && read(["out"], cubic).first.indices["effective-volume"].unit.name).toBe("m3");
  });

  test("a level dosed into one of them arrives thinned", () => {
    const { first, codes } = read(["out"], two, "step: 2.5 g/L");
    expect(first.recovery.value).toBeCloseTo(1, 3);
    expect(codes).toEqual([]);
  });
});

test("inside the vessel nothing is said of all of it; the body before the one outlet is as good as the outlet", () => {
  const chain = parseNetwork(
    "network: Tanks\nformat: 1\nfeeds: {feed: {flow: 10 L/min, to: tank}}\ncompartments: {tank: {kind: stirred, volume: 20 L, to: last}, last: {kind: stirred, volume: 5 L, to: out}}\noutlets: [out]\n",
  ).document;
  if (!chain) throw new Error("no network");
  const inside = read(["tank"], chain);
  expect(inside.notSupported.join()).toContain("it is not the outlet of the vessel");
  expect(inside.first.indices["effective-volume"]).toBeUndefined();
  expect(Object.keys(read(["last"], chain).first.indices)).toContain("effective-volume");
});
