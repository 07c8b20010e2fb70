import { describe, expect, test } from "vitest";
import { compile } from "../../src/compile/compile.js";
import { parseDuty } from "../../src/parse/duty.js";
import { parseNetwork } from "../../src/parse/network.js";
import { transient } from "../../src/transient/transient.js";

const chemistry = `chemistry: Second order
format: 1
species: {A: {}, P: {}}
constants: {k: 0.2 L/mol/min}
reactions: [{equation: A -> P, rate: k * A^2}]
`;

function read(body: string) {
  const net = parseNetwork(
    `network: A body\nformat: 1\nfeeds: {feed: {flow: 1 L/min, to: body}}\ncompartments: {body: {${body}, volume: 10 L, to: out}}\noutlets: [out]\n`,
    { path: "n.yaml" },
  );
  const duty = parseDuty("duty: A start\nformat: 1\nchemistry: c.yaml\nfeeds: {feed: {A: 1 mol/L}}\n", {
    path: "d.yaml",
    read: () => chemistry,
  });
  const plant = net.document && compile(net.document).plant;
  if (!plant || !duty.document) throw new Error("unread");
  return { plant, duty: duty.document };
}

describe("what a body holds after a start from clean liquid", () => {
  test.each([6, 10, 20, 80])("laminar flow, second order, %d min: A and P together are fed less what left", (until) => {
    const { plant, duty } = read("kind: laminar");
    const { balance } = transient(plant, duty.chemistry, duty, [0, 60 * until], { at: [] });
    if (!balance) throw new Error("no balance");
    // Of liquid alone, F(t) = 1 - (tau / 2 t)^2 from half the mean time: t F integrated from 5 min is t - 5 + 25/t - 5.
    const left = until - 10 + 25 / until;
    expect((balance.held[0] + balance.held[1]) / (until - left)).toBeCloseTo(1, 9);
    expect((balance.left[0] + balance.left[1]) / left).toBeCloseTo(1, 7);
    expect(balance.conserved).toBeLessThan(1e-9);
  });
});
