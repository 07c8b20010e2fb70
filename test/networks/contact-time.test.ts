import { readFileSync } from "node:fs";
import { describe, expect, test } from "vitest";
import { compile } from "../../src/compile/compile.js";
import { parseDuty } from "../../src/parse/duty.js";
import { parseNetwork } from "../../src/parse/network.js";
import { networkSettings } from "../../src/reaction/conditions.js";
import { predict } from "../../src/reaction/prediction.js";
import { regulatedFigures } from "../../src/reaction/regulated.js";

/** Worked contact times: 3 log of Giardia by free chlorine as in US EPA 815-R-20-003, table B-1; Chick (1908), Watson (1908). */
const { worked } = JSON.parse(readFileSync("shared/reference/disinfection/contact-time.json", "utf8")) as {
  worked: readonly Record<string, number>[];
};

describe("worked contact times: the regulator's credit and the modelled kill, apart", () => {
  test.each(worked)("$tanks_N tanks, $tau_min min, $C mg/L at $T degC and pH $pH", (of) => {
    const network = parseNetwork(
      `network: contact tank\nformat: 1\nfeeds: {feed: {flow: 1 m3/min, to: tank}}\ncompartments: {tank: {kind: stirred, repeat: ${of.tanks_N}, volume: ${of.tau_min} m3, to: out}}\noutlets: [out]\n`,
    ).document;
    const chemistry = `chemistry: Chick-Watson\nformat: 1\nspecies: {N: {}, C: {}}\nconstants: {k: ${(3 * Math.LN10) / of.CT3} L/mg/min}\nreactions: [{makes: {N: -1}, rate: k * C * N}]\n`;
    const duty = parseDuty(
      `duty: peak hour\nformat: 1\nchemistry: c.yaml\nfeeds: {feed: {N: 1000 1/mL, C: ${of.C} mg/L}}\nreport: [log-removal of N, t10 at out]\nregulated: {at: out, residual: ${of.C} mg/L, inactivation: {giardia: {log: 3, ct: ${of.CT3} mg·min/L}}}\n`,
      { path: "d.yaml", read: () => chemistry },
    ).document;
    const plant = network && duty && compile(network, networkSettings(duty)).plant;
    if (!plant || !duty?.regulated) throw new Error("no plant");
    const { figures, bounds, state } = predict(plant, duty);
    expect(state.converged).toBe(true);
    expect(figures[0].value).toBeCloseTo(of.log_by_segregated_or_first_order, 9);
    expect(10 ** -figures[0].value).toBeCloseTo(of.survival, 9);
    // First order in what is killed: mixing early or late makes no difference.
    expect(bounds[0]?.segregated.value).toBeCloseTo(of.log_by_segregated_or_first_order, 6);
    expect(figures[1].value / 60).toBeCloseTo(of.t10_min, 6);
    const regulated = regulatedFigures(plant, duty.regulated);
    expect(regulated.bafflingFactor).toBeCloseTo(of.baffling_factor, 7);
    expect((regulated.ct ?? 0) * (1000 / 60)).toBeCloseTo(of.CT_t10, 5);
    expect(regulated.credits[0].credit).toBeCloseTo(of.log_by_CT_t10, 6);
    // Only the regulator's number counts, and it is the lower.
    expect(regulated.credits[0].credit).toBeLessThan(figures[0].value);
  });
});
