import { describe, expect, test } from "vitest";
import { compile } from "../../src/compile/compile.js";
import { branchesAlong, nextTurns } from "../../src/reaction/branches.js";
import { steadyState } from "../../src/reaction/steady.js";
import { gasConstant, one, read, rootsOf } from "./read.js";

/** First-order exothermic tank in the numbers of Uppal, Ray & Poore (1974, from memory): B and gamma at a feed of 300 K. */
const tank = (B: number, gamma: number, body = "{kind: stirred, volume: 100 L, to: product}") => {
  const chemistry = `chemistry: first order
format: 1
species: {A: {}, P: {}}
constants: {k: {at: 300 K, value: 0.003 1/min, activation: ${gamma * gasConstant * 300} J/mol}}
reactions:
  - {equation: A -> P, rate: k * A, heat: ${-((B * 300) / gamma) * 4} kJ/mol}
medium: {heat-capacity: 4 kJ/L/K}
`;
  const duty =
    "duty: made for a test\nformat: 1\nchemistry: c.yaml\nheat: adiabatic\nfeeds: {feed: {A: 1 mol/L, temperature: 300 K}}\nreport: [conversion of A]\n";
  return read(one(body), duty, chemistry);
};

const alongFlow = (plant: ReturnType<typeof tank>["plant"], from: number, to: number) => ({
  from,
  to,
  plantAt: (value: number) => compile(plant.network, { "feed.flow": value }).plant,
  settingsAt: () => ({}),
});

describe("steady states along an input", () => {
  test("ignition and extinction of an adiabatic tank along its flow, against the closed form", () => {
    // Da = x / (1 - x) exp(-B x / (1 + B x / gamma)) turns where 1 / (x (1 - x)) = B / (1 + B x / gamma)^2.
    const [B, gamma] = [10, 20];
    const { plant, duty } = tank(B, gamma);
    const fold = (x: number): number => (1 + (B * x) / gamma) ** 2 - B * x * (1 - x);
    const flows = rootsOf(fold, 0.001, 0.999, 2000).map((x) => {
      const Da = (x / (1 - x)) * Math.exp((-B * x) / (1 + (B * x) / gamma));
      return (0.003 / 60) * (0.1 / Da);
    });
    const along = alongFlow(plant, 0.2 * flows[0], 2 * flows[1]);
    const found = branchesAlong(duty, along);
    expect(found.left).toEqual([]);
    expect(found.branches.length).toBe(1);
    const turns = [...found.turns].sort((a, b) => a.at - b.at);
    expect(turns.map((t) => [t.what, t.as])).toEqual([
      ["ignites", "falls"],
      ["goes out", "rises"],
    ]);
    turns.forEach((t, k) => {
      expect(Math.abs(t.at / flows[k] - 1)).toBeLessThan(1e-8);
    });
    for (const { at, state, stable } of found.branches[0]) {
      expect(Math.abs(state.heat?.closure as number)).toBeLessThan(1e-9);
      if (at < flows[0] * 0.999 || at > flows[1] * 1.001) expect(stable).toBe(true);
    }
    // From a cold vessel between the two, only less flow ignites it.
    const now = (flows[0] + flows[1]) / 2;
    const there = along.plantAt(now);
    const next = nextTurns(found, now, steadyState(there as NonNullable<typeof there>, duty.chemistry, duty));
    expect(next.rising).toBeUndefined();
    expect(next.falling?.what).toBe("ignites");
  });

  test("a tank with an ignited state that hangs together with no other: found all the same", () => {
    // Cooled, the hot states may form a closed curve over the flow (Uppal, Ray & Poore 1976, from memory): too little flow
    // brings too little heat for the jacket, too much leaves too little time.
    const chemistry = `chemistry: first order
format: 1
species: {A: {}, P: {}}
constants: {k: {at: 300 K, value: 0.0035 1/min, activation: ${20 * gasConstant * 300} J/mol}}
reactions:
  - {equation: A -> P, rate: k * A, heat: -840 kJ/mol}
medium: {heat-capacity: 4 kJ/L/K}
`;
    const { plant, duty } = read(
      one("{kind: stirred, volume: 100 L, to: product}"),
      "duty: made for a test\nformat: 1\nchemistry: c.yaml\nheat: {body: {jacket: 300 K, conductance: 500 W/K}}\nfeeds: {feed: {A: 1 mol/L, temperature: 300 K}}\nreport: [conversion of A]\n",
      chemistry,
    );
    const found = branchesAlong(duty, alongFlow(plant, 0.2e-3 / 60, 60e-3 / 60));
    const balance = (flow: number) => (T: number) => {
      const Da = ((0.0035 / 60) * 0.1 * Math.exp(20 * (1 - 300 / T))) / flow;
      return (Da / (1 + Da)) * 840e6 * flow - (flow * 4e6 + 500) * (T - 300);
    };
    expect(found.branches.length).toBe(2);
    expect(found.branches.some((b) => b[0].at === b.at(-1)?.at)).toBe(true);
    // At every flow that is drawn, as many states as the scalar balance has.
    for (const flow of [1, 5, 12, 20, 40].map((q) => (q * 1e-3) / 60)) {
      const count = rootsOf(balance(flow), 299.9, 530, 40_000).length;
      let crossed = 0;
      for (const points of found.branches) {
        points.forEach((p, k) => {
          if (k > 0 && (points[k - 1].at - flow) * (p.at - flow) < 0) crossed++;
        });
      }
      expect(crossed).toBe(count);
    }
  });

  test("without heat: a rate that its substrate holds back, along the volume", () => {
    const chemistry = `chemistry: inhibited
format: 1
species: {S: {}}
constants: {v: 2 mol/L/min, half: 0.1 mol/L, hinder: 0.1 mol/L}
reactions:
  - {makes: {S: -1}, rate: v * S / (half + S + S^2 / hinder)}
`;
    const { plant, duty } = read(
      one("{kind: stirred, volume: 33 L, to: product}")
        .replace("format: 1\n", "format: 1\nconstants: {size: 33 L}\n")
        .replace("33 L, to", "size, to"),
      "duty: x\nformat: 1\nchemistry: c.yaml\nfeeds: {feed: {S: 2 mol/L}}\nreport: [conversion of S]\n",
      chemistry,
    );
    const found = branchesAlong(duty, {
      from: 5e-3,
      to: 100e-3,
      plantAt: (size) => compile(plant.network, { size }).plant,
      settingsAt: () => ({}),
    });
    // V / Q v = (2 - s)(0.1 + s + 10 s^2) / s turns where its derivative is 0.
    const volume = (s: number): number => (((2 - s) * (0.1 + s + 10 * s * s)) / s / 2) * 10e-3;
    const slope = (s: number): number => volume(s * (1 + 1e-6)) - volume(s * (1 - 1e-6));
    const expected = rootsOf(slope, 0.01, 1.99, 5000)
      .map(volume)
      .sort((a, b) => a - b);
    expect(found.turns.map((t) => t.at).sort((a, b) => a - b)).toEqual(expected.map((v) => expect.closeTo(v, 9)));
    expect(found.turns.every((t) => t.what === "ends")).toBe(true);
  });

  test("a tube with recycle: stable outside its turns, unstable between them, what goes out told from what ignites", () => {
    const network = `network: loop
format: 1
feeds: {feed: {flow: 1 L/min, to: pfr}}
compartments:
  pfr: {kind: tubular, volume: 10 L, to: {pfr: 2 L/min, out: rest}}
outlets: [out]
`;
    const chemistry = `chemistry: first order
format: 1
species: {A: {}, P: {}}
constants: {k: {at: 300 K, value: 0.001 1/min, activation: 60 kJ/mol}}
reactions: [{equation: A -> P, rate: k * A, heat: -200 kJ/mol}]
medium: {heat-capacity: 4 kJ/L/K}
`;
    const duty =
      "duty: x\nformat: 1\nchemistry: c.yaml\nheat: adiabatic\nfeeds: {feed: {A: 2 mol/L, temperature: 300 K}}\nreport: [conversion of A]\n";
    const { plant, duty: hot } = read(network, duty, chemistry);
    const found = branchesAlong(hot, {
      from: 280,
      to: 350,
      plantAt: () => plant,
      settingsAt: (T) => ({ "feed.temperature": T }),
    });
    const [branch] = found.branches;
    const places = found.turns.map((t) => t.point).sort((x, y) => x - y);
    branch.forEach((p, k) => {
      if (!places.includes(k)) expect(p.stable).toBe(k < places[0] || k > places[1]);
    });
    // Whatever ignites is cold, whatever goes out is hot: heat makes temperature and conversion go together.
    const turns = [...found.turns].sort((a, b) => a.at - b.at);
    expect(turns.map((t) => [t.what, t.as])).toEqual([
      ["goes out", "falls"],
      ["ignites", "rises"],
    ]);
    expect(turns[0].state.outlets[0].temperature ?? 0).toBeGreaterThan(
      (turns[1].state.outlets[0].temperature ?? 0) + 30,
    );
  });

  test("a chemostat is washed out where its cells grow as fast as they are carried off at the feed", () => {
    const network = `network: chemostat
format: 1
parameters: {Q: {value: 0.4 L/h, between: [0.05 L/h, 1 L/h]}}
feeds: {feed: {flow: Q, to: tank}}
compartments: {tank: {kind: stirred, volume: 1 L, to: out}}
outlets: [out]
`;
    const chemistry = `chemistry: monod
format: 1
species: {S: {}, X: {}}
constants: {mu: 0.5 1/h, ks: 0.1 g/L, kd: 0.02 1/h}
reactions:
  - {makes: {S: -2, X: 1}, rate: mu * S / (ks + S) * X}
  - {makes: {X: -1}, rate: kd * X}
`;
    const duty = "duty: x\nformat: 1\nchemistry: c.yaml\nfeeds: {feed: {S: 10 g/L}}\nreport: [conversion of S]\n";
    const { plant, duty: fed } = read(network, duty, chemistry);
    const found = branchesAlong(fed, {
      from: 0.1e-3 / 3600,
      to: 0.6e-3 / 3600,
      plantAt: (Q) => compile(plant.network, { Q }).plant,
      settingsAt: () => ({}),
    });
    expect(found.left).toEqual([]);
    expect(found.turns.map((t) => [t.what, t.as, t.of])).toEqual([
      ["washes out", "rises", "X"],
      ["gives way", "falls", undefined],
    ]);
    // mu S / (ks + S) - kd at S = 10 g/L, by 1 L.
    for (const { at } of found.turns) expect(at * 3600e3).toBeCloseTo((0.5 * 10) / 10.1 - 0.02, 7);
    expect(found.turns[0].state.left[1]).toBe(0);
  });
});
