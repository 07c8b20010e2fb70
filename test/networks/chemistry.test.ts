import { describe, expect, test } from "vitest";
import { chemistryNames, flask, load, type Mixture, tank, tube } from "./chemistries.js";
import { chemistryReadme } from "./chemistry-readme.js";

/** SI of what the files are written in. */
const molar = 1e3;
const [min, h] = [60, 3600];
/** g/L and mg/L in kg/m3. */
const [gram, milligram] = [1, 1e-3];

const close = (is: number, wanted: number, within = 1e-8): void =>
  expect(Math.abs(is - wanted)).toBeLessThan(within * Math.max(Math.abs(wanted), 1e-12));

test("the page of chemistries tells all of them", async () => {
  const page = chemistryReadme(chemistryNames);
  await expect(page).toMatchFileSnapshot("../../shared/chemistry/README.md");
});

test.each(chemistryNames)("%s says where it comes from, and that its constants are no facts of yours", (name) => {
  expect(load(name).at.source.text).toMatch(/notes: >?-?[\s\S]*(demo|Demo|from memory)/);
});

/** A mixture with some of everything that its laws need. */
const some: Record<string, Mixture> = {
  monod: { cells: 0.1 * gram, substrate: 2 * gram },
  haldane: { cells: 0.1 * gram, substrate: 2 * gram },
  "radical-polymerisation": { initiator: 20, monomer: 5000 },
  hom: { organisms: 1e6, disinfectant: milligram },
  "chick-watson": { organisms: 1e6, disinfectant: milligram },
  leaching: { coarse: 2, "coarse-once": 2, fine: 1, "fine-once": 1 },
};
const mixture = (name: string): Mixture =>
  some[name] ?? Object.fromEntries(load(name).species.map((s, i) => [s.name, (i + 1) * 10]));

test.each(chemistryNames)("%s: a flask after a time is what leaves a tube of that space time", (name) => {
  const held = mixture(name);
  const [batch, pipe] = [flask(name, held, 30 * min), tube(name, held, 30 * min)];
  const size = Math.max(...Object.values(held));
  for (const { name: s } of load(name).species) expect(Math.abs(batch[s] - pipe[s])).toBeLessThan(1e-7 * size);
});

test.each(chemistryNames)("%s: nothing falls below zero, in a tank or a tube, short or long", (name) => {
  for (const time of [1, min, h, 100 * h])
    for (const c of [tank(name, mixture(name), time), tube(name, mixture(name), time)])
      for (const x of Object.values(c)) expect(x).toBeGreaterThanOrEqual(0);
});

describe("closed forms and what the sources say", () => {
  test("first-order decay: exp(-k t), 1 / (1 + k t)", () => {
    close(tube("first-order-decay", { A: molar }, 20 * min).A, molar * Math.exp(-2));
    close(tank("first-order-decay", { A: molar }, 20 * min).A, molar / 3);
  });

  test("power law of half order is over in the time 2 sqrt(C0) / k; of order 2, 1 / (1 + k C0 t)", () => {
    // k = 0.1 (mol/L)^0.5 / min: sqrt(C) = sqrt(C0) - k t / 2, so over after 20 min.
    close(tube("power-law", { A: molar }, 10 * min).A, molar * (1 - 0.05 * 10) ** 2);
    expect(tube("power-law", { A: molar }, 21 * min).A).toBe(0);
    close(tube("power-law", { A: 2 * molar }, 10 * min, { order: 2 }).A, (2 * molar) / (1 + 0.1 * 2 * 10));
    // Stirred, half order: x^2 + k tau x - 1 = 0 with x = sqrt(C).
    const x = (-1 + Math.sqrt(1 + 4)) / 2;
    close(tank("power-law", { A: molar }, 10 * min).A, molar * x * x);
  });

  test("reversible: A falls to its equilibrium at the rate k (1 + 1/K), and K follows van 't Hoff", () => {
    const [k, K] = [0.2 / min, 4];
    const end = molar / (1 + K);
    close(tube("reversible", { A: molar }, 5 * min).A, end + (molar - end) * Math.exp(-k * (1 + 1 / K) * 5 * min));
    const warm = tube("reversible", { A: molar }, 1000 * h, { temperature: 348.15 });
    close(warm.B / warm.A, K * Math.exp((-30e3 / 8.314462618) * (1 / 298.15 - 1 / 348.15)), 1e-7);
    // Forward over back is the equilibrium constant at any temperature: from B alone it ends in the same place.
    const back = tube("reversible", { B: molar }, 1000 * h, { temperature: 348.15 });
    close(back.A, warm.A, 1e-7);
  });

  test("series and parallel: R is most at ln(ka / k2) / (ka - k2) in a tube, 1 / sqrt(ka k2) in a tank", () => {
    const [k1, k2, k3] = [0.2, 0.05, 0.02].map((k) => k / min);
    const ka = k1 + k3;
    const t = Math.log(ka / k2) / (ka - k2);
    const most = (k1 / ka) * (ka / k2) ** (k2 / (k2 - ka)) * molar;
    close(tube("series-parallel", { A: molar }, t).R, most);
    expect(tube("series-parallel", { A: molar }, 1.05 * t).R).toBeLessThan(most);
    expect(tube("series-parallel", { A: molar }, 0.95 * t).R).toBeLessThan(most);
    const tau = 1 / Math.sqrt(ka * k2);
    const stirred = tank("series-parallel", { A: molar }, tau);
    close(stirred.R, (k1 * tau * molar) / ((1 + ka * tau) * (1 + k2 * tau)));
    // What goes to U beside R is k3 / k1 of what R and S are, whatever the mixing.
    for (const c of [stirred, tube("series-parallel", { A: molar }, t)]) close(c.U / (c.R + c.S), k3 / k1);
  });

  test("consecutive second order: P from A and B by the ratio of the constants alone (J.J. Martin's elimination of time)", () => {
    const c = tube("consecutive", { A: molar, B: 3 * molar }, 3 * min);
    // dP/dA = -1 + (k2/k1) P / A: P = A0 / (1 - r) (a^r - a), a = A / A0, r = k2/k1.
    const [r, a] = [0.25, c.A / molar];
    close(c.P, (molar / (1 - r)) * (a ** r - a));
    close(c.A + c.P + c.S, molar);
    close(c.B + c.P + 2 * c.S, 3 * molar);
  });

  test("saponification: second order, 1.25 times as fast five kelvins up", () => {
    const k = 0.11 / molar;
    const at = (temperature: number) =>
      tube("second-order-hydrolysis", { ester: 50, base: 50 }, 200, { temperature }).ester;
    close(at(298.15), 50 / (1 + k * 50 * 200));
    const warmer = (50 / at(303.15) - 1) / (50 / at(298.15) - 1);
    close(warmer, Math.exp((47e3 / 8.314462618) * (1 / 298.15 - 1 / 303.15)), 1e-7);
  });

  test("Michaelis-Menten: the integrated law, with apparent constants of each inhibition", () => {
    // most t = half (1 + I/Kc) ln(S0/S) + (1 + I/Ku)(S0 - S) + (S0^2 - S^2) / (2 Ki); Segel (1975), ch. 2 to 4, from memory.
    const time = (s0: number, s: number, i: number) =>
      (0.02 * (1 + i / 0.01) * Math.log(s0 / s) + (1 + i / 0.1) * (s0 - s) + (s0 ** 2 - s ** 2) / (2 * 0.5)) / 0.05;
    for (const inhibitor of [0, 0.03]) {
      const { substrate } = tube("michaelis-menten", { substrate: 0.2 * molar, inhibitor: inhibitor * molar }, 3 * min);
      close(time(0.2, substrate / molar, inhibitor), 3, 1e-7);
    }
  });

  test("Langmuir-Hinshelwood: equal parts without product inhibition, in closed form; a maximum of the rate at K C = 1", () => {
    // dC/dt = -k KA KB C^2 / (1 + (KA + KB) C)^2: k KA KB t = [-1/C + 2 S ln C + S^2 C] from C to C0, S = KA + KB.
    const primitive = (c: number) => -1 / c + 2 * 3 * Math.log(c) + 9 * c;
    const c = tube("langmuir-hinshelwood", { A: molar, B: molar }, 4 * min, { "K-C": 0 }).A / molar;
    close((primitive(1) - primitive(c)) / (0.5 * 2 * 1), 4, 1e-7);
    // A alone: half of it holds the sites at K-A A = 1, beyond which more A is slower.
    const { reactions } = load("langmuir-hinshelwood");
    const rate = (a: number) => reactions[0].rate([a, 1, 0, 1, 2e-3, 1e-9, 0]);
    expect(rate(500)).toBeGreaterThan(rate(490));
    expect(rate(500)).toBeGreaterThan(rate(510));
  });

  test("Monod: the chemostat of Herbert, Elsworth & Telling (1956), and washout", () => {
    const [mu, ks, y, kd] = [0.5, 0.02, 0.5, 0.01];
    const fed = { cells: 1e-9 * gram, substrate: 2 * gram };
    for (const d of [0.1, 0.3]) {
      const c = tank("monod", { ...fed, cells: 1e-3 }, h / d);
      // With a trace of cells in the feed the balance of cells is D (x - x0) = (mu(S) - kd) x, exactly.
      const s = c.substrate;
      close((mu * s) / (ks + s), d * (1 - 1e-3 / c.cells) + kd, 1e-7);
      close(s, (ks * (d + kd)) / (mu - d - kd), 0.01);
      close(c.cells, (y * (2 - s) * d) / (d + kd), 0.01);
    }
    // Beyond D = mu S0 / (ks + S0) - kd the cells go.
    const critical = (mu * 2) / (ks + 2) - kd;
    const gone = tank("monod", { ...fed, cells: 1e-6 }, h / (1.2 * critical));
    expect(gone.cells).toBeLessThan(1e-4);
    expect(gone.substrate).toBeGreaterThan(1.999);
  });

  test("Haldane: growth is most at sqrt(half inhibition), and the steady state solves Andrews' quadratic", () => {
    const [mu, ks, ki, y] = [0.5, 0.03, 0.3, 0.6];
    const { reactions } = load("haldane");
    const rate = (s: number) => reactions[0].rate([1, s, mu, ks, ki, y]);
    const top = Math.sqrt(ks * ki);
    expect(rate(top)).toBeGreaterThan(Math.max(rate(0.98 * top), rate(1.02 * top)));
    close(rate(top), mu / (1 + 2 * Math.sqrt(ks / ki)));
    const d = 0.2;
    const c = tank("haldane", { cells: 0.4, substrate: 1 }, h / d);
    close((mu * c.substrate) / (ks + c.substrate + c.substrate ** 2 / ki), d * (1 - 0.4 / c.cells), 1e-7);
    close(c.cells - 0.4, y * (1 - c.substrate), 1e-7);
  });

  test("autocatalysis: the logistic curve, and a tank that works where a tube with so little could not", () => {
    const [a, r] = [molar, 1e-3 * molar];
    const grown = (t: number) => (r * (a + r)) / (r + a * Math.exp(-(0.5 / molar / min) * (a + r) * t));
    close(tube("autocatalytic", { A: a, R: r }, 10 * min).R, grown(10 * min), 1e-7);
    // k (A0 + R0) tau = 5: stirred, about 1 - 1/5 is made; along a tube next to nothing.
    expect(tank("autocatalytic", { A: a, R: r }, 10 * min).R / molar).toBeGreaterThan(0.79);
    expect(tube("autocatalytic", { A: a, R: r }, 10 * min).R / molar).toBeLessThan(0.2);
  });

  test("Chick & Watson with decay: ln S = -k C0 (1 - exp(-k' t)) / k'", () => {
    const c = tube("chick-watson", { organisms: 1e9, disinfectant: 2 * milligram }, 15 * min);
    close(Math.log(c.organisms / 1e9), (-0.5 * 2 * (1 - Math.exp(-0.01 * 15))) / 0.01, 1e-8);
  });

  test("Hom with decay: the incomplete gamma function of Haas & Joffe (1994)", () => {
    // ln S = -kill m C0^n integral of t^(m-1) exp(-n k' t); with m = 2, gamma(2, x) = 1 - (1 + x) exp(-x).
    const [kill, n, decay, c0, t] = [0.1, 0.9, 0.02, 1.5, 12];
    const x = n * decay * t;
    const gamma = 1 - (1 + x) * Math.exp(-x);
    const fed = { organisms: 1e9, disinfectant: c0 * milligram };
    const c = tube("hom", fed, t * min, { m: 2 });
    close(Math.log(c.organisms / 1e9), (-kill * 2 * c0 ** n * gamma) / (n * decay) ** 2, 1e-7);
    close(c.age, t * milligram, 1e-8);
    // With m = 1 it is Chick and Watson's law.
    const plain = tube("hom", fed, t * min, { m: 1, n: 1 });
    close(Math.log(plain.organisms / 1e9), (-kill * c0 * (1 - Math.exp(-decay * t))) / decay, 1e-7);
    // Age in a tank is its space time.
    close(tank("hom", fed, t * min).age, t * milligram, 1e-8);
  });

  test("a catalyst that tires: ln(A0/A) = k a0 (1 - exp(-kd t)) / kd", () => {
    const c = tube("catalyst-decay", { A: molar, activity: gram }, 30 * min);
    close(Math.log(molar / c.A), (0.3 * (1 - Math.exp(-0.05 * 30))) / 0.05, 1e-7);
  });

  test("polymer moments: in a tank DPn = 1 + v and dispersity 2 - 1 / (1 + v); monomer is in the chains", () => {
    const [f, kd, kp, kt] = [0.6, 4e-5, 0.48, 8e4];
    const c = tank("radical-polymerisation", { initiator: 20, monomer: 5000 }, 4 * h);
    const v = (kp * c.monomer) / Math.sqrt(2 * f * kd * c.initiator * kt);
    close(c["moment-1"] / c["moment-0"], 1 + v, 1e-7);
    close((c["moment-2"] * c["moment-0"]) / c["moment-1"] ** 2, (1 + 3 * v + 2 * v * v) / (1 + v) ** 2, 1e-7);
    expect((c["moment-2"] * c["moment-0"]) / c["moment-1"] ** 2).toBeCloseTo(2 - 1 / (1 + v), 8);
    // Each chain counts the fragment that began it as a unit.
    close(c["moment-1"] - c["moment-0"], 5000 - c.monomer, 1e-7);
    close(c["moment-0"], 2 * f * (20 - c.initiator), 1e-7);
    // Chains made at falling concentrations differ more: a tube is broader here than a tank of the same conversion.
    const batch = tube("radical-polymerisation", { initiator: 20, monomer: 5000 }, 12 * h);
    close(batch["moment-1"] - batch["moment-0"], 5000 - batch.monomer, 1e-7);
    expect((batch["moment-2"] * batch["moment-0"]) / batch["moment-1"] ** 2).toBeGreaterThan(2);
  });

  test("by-product: second order of unequal parts", () => {
    const [a, b] = [3, 5];
    const c = tube("by-product", { chlorine: a * milligram, precursor: b * milligram }, 10 * h);
    const left = (a * (b - a)) / (b * Math.exp(0.02 * (b - a) * 10) - a);
    close(c.chlorine / milligram, left, 1e-7);
    close(c["by-product"], 0.04 * (a * milligram - c.chlorine), 1e-7);
  });

  test("aeration: towards saturation as 1 - exp(-kLa t); with uptake, what goes over is what is used and what leaves", () => {
    const o = tube("aeration", {}, 3 * min);
    close(o.oxygen, 9 * milligram * (1 - Math.exp(-20 * (3 / 60))), 1e-7);
    const c = tank("aeration", { demand: 100 * milligram }, 2 * h);
    const over = 20 * (9 * milligram - c.oxygen) * 2;
    close(over, c.oxygen + (100 * milligram - c.demand), 1e-7);
  });

  test("flotation: recovery of each class by its own rate", () => {
    const c = tank("flotation-classes", { fast: 6, slow: 3 }, 2 * min);
    close(c.floated, (6 * 3) / 4 + (3 * 0.2) / 1.2);
  });

  test("leaching: 1 - (1 - t / life)^3 of each class, and over at its life", () => {
    const fed = { coarse: 2, "coarse-once": 2, fine: 1, "fine-once": 1 };
    const c = tube("leaching", fed, h);
    close(c.coarse, 2 * (1 - 1 / 8) ** 3, 1e-6);
    close(c.fine, (1 - 1 / 2) ** 3, 1e-6);
    close(c.dissolved, 3 - c.coarse - c.fine, 1e-8);
    const later = tube("leaching", fed, 3 * h);
    expect(later.fine).toBeLessThan(1e-6);
    close(later.coarse, 2 * (1 - 3 / 8) ** 3, 1e-6);
  });
});
