import { describe, expect, test } from "vitest";
import { compile } from "../../src/compile/compile.js";
import type { Plant } from "../../src/compile/plant.js";
import type { Regulated } from "../../src/model/duty.js";
import { parseDuty } from "../../src/parse/duty.js";
import { parseNetwork } from "../../src/parse/network.js";
import { regulatedFigures } from "../../src/reaction/regulated.js";

const plant = (body: string): Plant => {
  const { document } = parseNetwork(
    `network: Contact tank\nformat: 1\nfeeds: {feed: {flow: 10 m3/h, to: tank}}\ncompartments: {tank: {${body}, to: out}}\noutlets: [out]\n`,
  );
  const made = document && compile(document).plant;
  if (!made) throw new Error("no plant");
  return made;
};

const declared = (more: string): Regulated => {
  const { document } = parseDuty(`duty: Peak hour\nformat: 1\nregulated: {at: out${more}}\n`);
  if (!document?.regulated) throw new Error("nothing declared");
  return document.regulated;
};

describe("regulated figures", () => {
  // t10 of equal tanks in a row: the 10 % point of a gamma distribution; of plug flow: all at V/Q.
  test.each([
    ["kind: stirred, volume: 20 m3", -Math.log(0.9)],
    ["kind: stirred, repeat: 2, volume: 20 m3", 0.265905804194806],
    ["kind: stirred, repeat: 3, volume: 20 m3", 0.36735510941644045],
    ["kind: stirred, repeat: 5, volume: 20 m3", 0.4865182051925328],
    ["kind: tubular, volume: 20 m3", 1],
  ])("the baffling factor of %s is its closed form", (body, factor) => {
    const found = regulatedFigures(plant(body), declared(""));
    expect(found.detention).toBeCloseTo(7200, 8);
    expect(found.bafflingFactor).toBeCloseTo(factor, 7);
    expect(found.t10).toBeCloseTo(factor * 7200, 3);
    expect(found.ct).toBeUndefined();
    expect(found.credits).toEqual([]);
  });

  test("credit is in proportion to the declared entry, from t10 of the network or from an assigned factor", () => {
    // 3 log of Giardia by free chlorine of 0.8 mg/L at 10 degC and pH 7.5 asks 131 mg min/L (US EPA 815-R-20-003, table B-1).
    const entry = ", residual: 0.8 mg/L, inactivation: {giardia: {log: 3, ct: 131 mg·min/L}}";
    const own = regulatedFigures(plant("kind: stirred, repeat: 3, volume: 20 m3"), declared(entry));
    const minutes = 0.36735510941644045 * 120;
    expect(own.ct).toBeCloseTo((0.8 * minutes * 60) / 1000, 6);
    expect(own.credits[0].credit).toBeCloseTo((3 * 0.8 * minutes) / 131, 6);
    const assigned = regulatedFigures(
      plant("kind: stirred, repeat: 3, volume: 20 m3"),
      declared(`, baffling-factor: 0.3${entry}`),
    );
    expect(assigned.from).toBe("baffling-factor");
    expect(assigned.credits[0].credit).toBeCloseTo((3 * 0.8 * 0.3 * 120) / 131, 12);
  });
});
