import { describe, expect, test } from "vitest";
import { at, backmix, json } from "./fake.js";

/** An adiabatic tank that heats by 100 K as all reacts, and a chemostat without living cells in its feed. */
const files = {
  "tank.yaml": `network: Tank
format: 1
feeds: {feed: {flow: 1 L/min, to: tank}}
compartments: {tank: {kind: stirred, volume: 10 L, to: product}}
outlets: [product]
`,
  "hot.yaml": `duty: Cold feed
format: 1
chemistry: hot.chem.yaml
feeds: {feed: {A: 2 mol/L, temperature: 300 K}}
heat: adiabatic
report: [conversion of A, temperature at product]
`,
  "hot.chem.yaml": `chemistry: Hot
format: 1
species: {A: {}, P: {}}
constants: {k: {at: 300 K, value: 0.001 1/min, activation: 80 kJ/mol}}
medium: {heat-capacity: 4 kJ/L/K}
reactions: [{equation: A -> P, rate: k * A, heat: -200 kJ/mol}]
`,
  "mild.yaml": `duty: Mild
format: 1
chemistry: hot.chem.yaml
feeds: {feed: {A: 0.1 mol/L, temperature: 300 K}}
heat: adiabatic
report: [log-removal of A]
`,
  "chemostat.yaml": `network: Chemostat
format: 1
parameters: {Q: {value: 0.4 L/h, between: [0.05 L/h, 1 L/h]}}
feeds: {feed: {flow: Q, to: tank}}
compartments: {tank: {kind: stirred, volume: 1 L, to: out}}
outlets: [out]
`,
  "monod.yaml": `duty: Sterile feed
format: 1
chemistry: monod.chem.yaml
feeds: {feed: {S: 10 g/L}}
report: [conversion of S]
`,
  "monod.chem.yaml": `chemistry: Monod
format: 1
species: {S: {}, X: {}}
constants: {mu: 0.5 1/h, ks: 0.1 g/L}
reactions: [{makes: {S: -2, X: 1}, rate: mu * S / (ks + S) * X}]
`,
  "fed.yaml": `duty: Started
format: 1
chemistry: monod.chem.yaml
feeds: {feed: {S: 10 g/L}}
contents: {tank: {X: 1 g/L}}
report: [conversion of S]
`,
  "swinging.yaml": `duty: Cooled
format: 1
chemistry: swinging.chem.yaml
heat: {tank: {jacket: 330 K, conductance: 300 W/K}}
feeds: {feed: {A: 4 mol/L, temperature: 320 K}}
report: [conversion of A]
`,
  "swinging.chem.yaml": `chemistry: Hot
format: 1
species: {A: {}, P: {}}
constants: {k: {at: 350 K, value: 0.3 1/min, activation: 100 kJ/mol}}
medium: {heat-capacity: 4 kJ/L/K}
reactions: [{equation: A -> P, rate: k * A, heat: -200 kJ/mol}]
`,
};

describe("several steady states in a sweep", () => {
  test("an aim at a temperature says that another stable state misses it, with both balances of that state", async () => {
    const args = ["sweep", "tank.yaml", "--duty", "hot.yaml", "--aim", "temperature at product <= 320 K"];
    const more = ["--by", "feed.temperature", "--between", "300 K..340 K"];
    const { document } = await json([...args, ...more], { files });
    const states = at(document, "otherStates.0.states") as { stable: boolean; fromFeed: boolean; report: object[] }[];
    expect(at(document, "otherStates.0.at.0.value")).toBeCloseTo(300, 9);
    expect(states.map((s) => s.stable)).toEqual([true, false, true]);
    expect(states.map((s) => s.fromFeed)).toEqual([true, false, false]);
    const T = at(states[2], "report.0.value") as number;
    // What has reacted by the heat balance is what reacts by the rate at that temperature.
    const reacted = (T - 300) / 100;
    const k = 0.001 * Math.exp((80_000 / 8.314462618) * (1 / 300 - 1 / T));
    expect(reacted).toBeCloseTo((10 * k) / (1 + 10 * k), 8);
    const { out: stdout } = await backmix([...args, ...more], { files });
    const said = stdout.replace(/\s+/g, " ");
    expect(said).toContain("another stable one gives temperature at product 396 K, which does not meet the aim");
    expect(said).toContain("A model made from a tracer test says nothing about runaway");
  });

  test("a sweep that follows an unstable state says so", async () => {
    const args = ["sweep", "chemostat.yaml", "--duty", "monod.yaml", "--over", "Q=0.2 L/h..0.9 L/h:2"];
    const { out: stdout } = await backmix(args, { files });
    const said = stdout.replace(/\s+/g, " ");
    expect(said).toContain("The steady state that is followed is unstable at Q = 0.2 L/h");
    const { document } = await json(args, { files });
    const states = at(document, "otherStates.0.states") as object[];
    // What lives there grows as fast as it is washed out: S = ks D / (mu - D).
    const best = Math.max(...states.map((s) => at(s, "report.0.value") as number));
    expect(best).toBeCloseTo(1 - (0.1 * 0.2) / (0.5 - 0.2) / 10, 8);
    // Above mu S / (ks + S) = 0.495 1/h nothing lives: one state, and nothing to tell.
    expect(at(document, "otherStates")).toHaveLength(1);
  });

  test("a jump is told with its place, its name and how far back it goes", async () => {
    const args = ["sweep", "tank.yaml", "--duty", "hot.yaml", "--over", "feed.temperature=285 K..320 K:8"];
    const { document } = await json([...args, "--draws", "0"], { files });
    expect(at(document, "jumps")).toHaveLength(1);
    expect(at(document, "jumps.0.what")).toBe("ignites");
    // x / (1 - x) = 10 k(T) with T = T0 + 100 x turns where T0(x) does.
    const feedFor = (x: number): number => {
      const T = 1 / (1 / 300 - (8.314462618 / 80_000) * Math.log(x / (1 - x) / 0.01));
      return T - 100 * x;
    };
    const all = Array.from({ length: 99_999 }, (_, k) => feedFor((k + 1) / 100_000));
    const turns = all.filter((T, k) => k > 0 && k < all.length - 1 && (T - all[k - 1]) * (all[k + 1] - T) < 0);
    expect(turns).toHaveLength(2);
    expect(at(document, "jumps.0.at.value")).toBeCloseTo(turns[0], 4);
    expect(at(document, "jumps.0.staysDownTo.value")).toBeCloseTo(turns[1], 5);
    expect(at(document, "jumps.0.figures.0.before.value")).toBeLessThan(0.13);
    expect(at(document, "jumps.0.figures.0.after.value")).toBeGreaterThan(0.98);
    const { out } = await backmix([...args, "--draws", "0"], { files });
    const said = out.replace(/\s+/g, " ");
    expect(said).toContain("At feed.temperature = 314.6 K the vessel ignites as feed.temperature rises");
    expect(said).toContain("Once there it stays so as feed.temperature falls again, down to 288.8 K.");
  });

  test("what the duty says the vessel holds chooses the state, in a sweep and an aim", async () => {
    const living = { ...files, "monod.yaml": `${files["monod.yaml"]}contents: {tank: {X: 1e-6 g/L}}\n` };
    const { document } = await json(
      ["sweep", "chemostat.yaml", "--duty", "monod.yaml", "--aim", "conversion of S = 90 %", "--by", "Q"],
      { files: living },
    );
    // S = ks D / (mu - D) = 1 g/L.
    expect(at(document, "crossings.0.value")).toBeCloseTo((0.5 * 1) / (0.1 + 1), 8);
    const { document: swept } = await json(
      ["sweep", "chemostat.yaml", "--duty", "monod.yaml", "--over", "Q=0.4 L/h..0.6 L/h:3"],
      { files: living },
    );
    expect(at(swept, "points.0.figures.0.value")).toBeCloseTo(1 - (0.1 * 0.4) / 0.1 / 10, 9);
    expect(at(swept, "points.2.figures.0.value")).toBeCloseTo(0, 9);
    const { out } = await backmix(
      ["sweep", "chemostat.yaml", "--duty", "monod.yaml", "--over", "Q=0.4 L/h..0.6 L/h:3"],
      { files },
    );
    expect(out.replace(/\s+/g, " ")).toContain("Say under `contents:` of the duty what the vessel holds");
  });

  test("where one state is found nothing is said of others; kill carries its caution", async () => {
    const { out: stdout } = await backmix(
      ["sweep", "tank.yaml", "--duty", "mild.yaml", "--over", "feed.A=0.05..0.1 mol/L:2"],
      {
        files,
      },
    );
    expect(stdout).not.toContain("which one the vessel runs at");
    expect(stdout).toContain("A modelled log-removal is not credit");
  });

  test("names of the duty, a temperature that is not there and a forgotten % are told in so many words", async () => {
    const err = async (...args: string[]): Promise<string> => {
      const ran = await backmix(args, { files });
      expect(ran.status).toBe(2);
      return ran.err.replace(/\s+/g, " ");
    };
    expect(await err("simulate", "tank.yaml", "--duty", "hot.yaml", "--set", "k=2 1/min")).toContain(
      "'k' follows the temperature, and heat balances need to know how",
    );
    expect(await err("sweep", "tank.yaml", "--duty", "hot.yaml", "--over", "temperature=300 K..310 K")).toContain(
      "a duty has one where it says `temperature:`",
    );
    const aim = ["--aim", "conversion of A >= 60", "--by", "feed.flow", "--between", "1 L/min..2 L/min"];
    expect(await err("sweep", "tank.yaml", "--duty", "hot.yaml", ...aim)).toContain("conversion of A cannot be 6000 %");
  });
});

describe("what a vessel that washes out or swings is told", () => {
  // Washed out where what is fed grows no faster than it leaves: D = mu S / (ks + S) (Monod).
  const washedOut = (0.5 * 10) / 10.1;

  test("a sweep and an aim name the wash-out, where no figure jumps", async () => {
    const sweep = ["sweep", "chemostat.yaml", "--duty", "fed.yaml"];
    const over = await json([...sweep, "--over", "Q=0.2 L/h..0.8 L/h:4"], { files });
    const aim = ["--aim", "conversion of S >= 90 %", "--by", "Q", "--between", "0.2 L/h..0.8 L/h"];
    const aimed = await json([...sweep, ...aim], { files });
    for (const { document } of [over, aimed]) {
      expect(at(document, "washOuts")).toHaveLength(1);
      expect(at(document, "washOuts.0.at.value")).toBeCloseTo(washedOut, 4);
      expect(at(document, "washOuts.0.of")).toBe("X");
    }
    const { out } = await backmix([...sweep, ...aim], { files });
    expect(out.replace(/\s+/g, " ")).toContain("At Q = 0.495 L/h X washes out as Q rises");
  });

  test("an aim is not infeasible where only the followed state, an unstable one, misses it", async () => {
    const args = ["sweep", "chemostat.yaml", "--duty", "monod.yaml", "--aim", "conversion of S >= 90 %"];
    const more = ["--by", "Q", "--between", "0.2 L/h..0.8 L/h"];
    const { out } = await backmix([...args, ...more], { files });
    const said = out.replace(/\s+/g, " ");
    expect(said).not.toContain("Infeasible");
    expect(said).toContain("another, a stable one, meets the aim where Q is up to 0.4");
    const { document } = await json([...args, ...more], { files });
    // S = 1 g/L is left: D = 0.5 / 1.1.
    expect(Math.abs((at(document, "metInStableState.0.to.value") as number) / (0.5 / 1.1) - 1)).toBeLessThan(0.005);
    // Nothing jumps about no conversion at all.
    expect(at(document, "jumps")).toEqual([]);
    const missed = await backmix([...args.slice(0, 5), "conversion of S >= 99.9 %", ...more], { files });
    expect(missed.out).toContain("Infeasible");
  });

  test("an only state that swings is named so, and nobody is sent to `contents`", async () => {
    const args = ["sweep", "tank.yaml", "--duty", "swinging.yaml", "--over", "feed.temperature=319 K..321 K:2"];
    const { out } = await backmix(args, { files });
    const said = out.replace(/\s+/g, " ");
    expect(said).toContain("the vessel swings and does not settle");
    expect(said).not.toContain("`contents:`");
  });

  test("a run in time that has not come to rest says so, and one that has does not", async () => {
    const run = async (duty: string, until: string): Promise<string> => {
      const { out } = await backmix(["simulate", "tank.yaml", "--duty", duty, "--transient", "--until", until], {
        files,
      });
      return out.replace(/\s+/g, " ");
    };
    expect(await run("swinging.yaml", "100 min")).toContain("still swings at the end of this run");
    expect(await run("hot.yaml", "10 min")).toContain("still changes at the end of this run");
    expect(await run("hot.yaml", "300 min")).not.toContain("at the end of this run");
  });
});
