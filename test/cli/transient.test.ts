import { describe, expect, test } from "vitest";
import { at, backmix, json } from "./fake.js";

const chemistry = `chemistry: Decay
format: 1
species: {A: {}, P: {}}
constants: {k: 0.05 1/min}
reactions: [{equation: A -> P, rate: k * A}]
`;
const growing = `chemistry: A branched chain
format: 1
species: {A: {}, P: {}}
constants: {k: 1 L/mol/min}
reactions: [{makes: {A: 1, P: 1}, rate: k * A^2}]
`;
const files = {
  "tank.yaml":
    "network: A tank\nformat: 1\nfeeds: {feed: {flow: 10 L/min, to: tank}}\ncompartments: {tank: {kind: stirred, volume: 100 L, to: product}}\noutlets: [product]\n",
  "flask.yaml": "network: A flask\nformat: 1\ncompartments: {flask: {kind: stirred, volume: 1 L}}\n",
  "chemistry.yaml": chemistry,
  "growing.yaml": growing,
  "upset.yaml":
    "duty: An upset\nformat: 1\nchemistry: chemistry.yaml\ntemperature: 25 degC\nfeeds: {feed: {A: {from: 1 mol/L ± 2 %, to: 2 mol/L, start: 2 min, lasting: 3 min}}}\nreport: [time A at product above 0.75 mol/L, A at product]\n",
  "batch.yaml":
    "duty: A batch\nformat: 1\nchemistry: chemistry.yaml\ncontents: {flask: {A: 1 mol/L}}\nreport: [conversion of A]\n",
  "blast.yaml": "duty: A blast\nformat: 1\nchemistry: growing.yaml\ncontents: {flask: {A: 1 mol/L}}\n",
};

const simulate = (network: string, duty: string, ...more: string[]): string[] => [
  "simulate",
  network,
  "--duty",
  duty,
  "--transient",
  ...more,
];

describe("a duty in time", () => {
  test("what is counted leaves as a number, not as a share", async () => {
    const counted =
      "duty: A count\nformat: 1\nchemistry: chemistry.yaml\nfeeds: {feed: {A: {from: 1000 1/mL, to: 2000 1/mL, start: 2 min, lasting: 3 min}}}\nreport: [time A at product above 100 1/mL]\n";
    const ask = simulate("tank.yaml", "counted.yaml", "--until", "10 min");
    const { document } = await json(ask, { files: { ...files, "counted.yaml": counted } });
    const [{ amount }] = at(document, "report") as { amount: { value: number; unit: string } }[];
    expect(amount.unit).toBe("1");
    // 10 L/min for 10 min at 667 to about 950 in 1 mL.
    expect(amount.value).toBeGreaterThan(1e5 * 667);
    expect(amount.value).toBeLessThan(1e5 * 950);
    const { out } = await backmix(ask, { files: { ...files, "counted.yaml": counted } });
    expect(out).toMatch(/left with \d\.\d+e7 A/);
  });

  test("prints one document with series, passages, figures and balances", async () => {
    const { status, document } = await json(simulate("tank.yaml", "upset.yaml", "--until", "60 min", "--points", "7"), {
      files,
    });
    expect(status).toBe(0);
    expect(at(document, "start")).toBe("steady");
    expect(at(document, "outlets.product.A.time")).toEqual({
      unit: "min",
      values: [0, 10, 20, 30, 40, 50, 60],
    });
    expect(at(document, "outlets.product.A.value.unit")).toBe("mol/L");
    expect(at(document, "outlets.product.temperature.value.values")).toEqual(Array(7).fill(25));
    const [over, last] = at(document, "report") as { value: number; unit: string; spans?: unknown[] }[];
    // 2/3 (1 + 1 - exp(-0.15 (t - 2))) = 0.75 and back
    const up = 2 - Math.log(1 - 0.125) / 0.15;
    const top = (2 / 3) * (1 - Math.exp(-0.45));
    const down = 5 + Math.log(top / (0.75 - 2 / 3)) / 0.15;
    expect(over.unit).toBe("min");
    expect(over.value).toBeCloseTo(down - up, 6);
    expect(over.spans).toHaveLength(1);
    expect(last.value).toBeCloseTo(2 / 3, 3);
    expect(Math.abs(at(document, "closure.A") as number)).toBeLessThan(1e-9);
  });

  test("says what is still beyond its limit where the run ends", async () => {
    const { document } = await json(simulate("tank.yaml", "upset.yaml", "--until", "4.5 min"), { files });
    expect(at(document, "report.0.stillAtEnd")).toBe(true);
    const { out } = await backmix(simulate("tank.yaml", "upset.yaml", "--until", "4.5 min"), { files });
    expect(out).toMatch(/at least 1\.61 min .* to 4\.5 min, still above at the end of the run/);
    const late = await json(simulate("tank.yaml", "upset.yaml", "--until", "60 min"), { files });
    expect(at(late.document, "report.0.stillAtEnd")).toBe(false);
  });

  test("writes curves as a table or as a picture, and says when to divert", async () => {
    const csv = await backmix(simulate("tank.yaml", "upset.yaml", "-o", "curves.csv", "--draws", "20"), { files });
    expect(csv.status).toBe(0);
    expect(csv.out).toMatch(/divert for 'A at product above 0.75 mol\/L': from \d.* to \d.* turned away/);
    expect(String(csv.written.get("curves.csv"))).toMatch(
      /^leaving,time \[min\],A \[mol\/L\],P \[mol\/L\]\nproduct,0,0.66666/,
    );
    const svg = await backmix(simulate("tank.yaml", "upset.yaml", "-o", "curves.svg"), { files });
    expect(String(svg.written.get("curves.svg"))).toContain("limit 0.75");
  });

  test("an upset keeps no column of what is done for good, and the steady state says that it is that before", async () => {
    const { out } = await backmix(simulate("tank.yaml", "upset.yaml"), { files });
    expect(out).not.toContain("99 % done");
    const steady = await backmix(["simulate", "tank.yaml", "--duty", "upset.yaml"], { files });
    expect(steady.out).toContain(
      "the steady state before the change that the duty tells of; --transient follows the change",
    );
    const { document } = await json(simulate("tank.yaml", "share.yaml", "--until", "60 min"), {
      files: { ...files, "share.yaml": files["upset.yaml"].replace(/^report:.*/m, "report: [conversion of A]") },
    });
    // Seen against what is fed at the time: while twice as much is fed, the share that is left is least of all.
    expect(at(document, "report.0.highest.at.value") as number).toBeLessThan(5.1);
    expect(at(document, "report.0.highest.value") as number).toBeGreaterThan(0.6);
  });

  test("the figure of the limit curve says from what it departs, and which way", async () => {
    const { written } = await backmix(simulate("tank.yaml", "upset.yaml", "--funnel", "-o", "f.svg"), { files });
    const drawn = String(written.get("f.svg"));
    expect(drawn).toContain("how much higher than the usual 1 mol/L, mol/L");
    expect(drawn).toContain("this duty&#39;s upset".replace("&#39;", drawn.includes("&#39;") ? "&#39;" : "'"));
  });

  test("tells the limit curve of upsets", async () => {
    const { document } = await json(simulate("tank.yaml", "upset.yaml", "--funnel", "--times", "1, 10 min"), { files });
    const points = at(document, "funnel.points") as { lasting: { value: number }; level: { value: number } }[];
    expect(points.map((p) => p.lasting.value)).toEqual([1, 10]);
    // 2/3 h (1 - exp(-0.15 d)) = 0.75 - 2/3
    for (const { lasting, level } of points)
      expect(level.value - 1).toBeCloseTo(0.125 / -Math.expm1(-0.15 * lasting.value), 4);
  });

  test("a limit curve of a flow that changes is refused for what it is", async () => {
    const flow = files["upset.yaml"].replace(
      "{from: 1 mol/L ± 2 %, to: 2 mol/L, start: 2 min, lasting: 3 min}",
      "1 mol/L",
    );
    const changed = {
      ...files,
      "flow.yaml": `${flow}flows: {feed: {from: 1 L/min, to: 2 L/min, start: 5 min, lasting: 10 min}}\n`,
    };
    const { status, err } = await backmix(simulate("tank.yaml", "flow.yaml", "--funnel"), { files: changed });
    expect(status).toBe(2);
    expect(err).toContain("the duty has only a flow or a logged feed that changes");
  });

  test("a flask needs an end, and runs to it", async () => {
    expect((await backmix(simulate("flask.yaml", "batch.yaml"), { files })).status).toBe(2);
    expect((await backmix(["simulate", "flask.yaml", "--duty", "batch.yaml"], { files })).status).toBe(2);
    const { document } = await json(simulate("flask.yaml", "batch.yaml", "--until", "20 min"), { files });
    expect(at(document, "report.0.value")).toBeCloseTo(1 - Math.exp(-1), 8);
  });

  test("what blows up ends with 3, its time and its place; what came before is kept", async () => {
    // A' = A^2: out of all bounds after 1 minute
    const args = simulate("flask.yaml", "blast.yaml", "--times", "0, 0.5, 2 min");
    const { status, document } = await json(args, { files });
    const { err } = await backmix(args, { files });
    expect(status).toBe(3);
    expect(at(document, "ok")).toBe(false);
    expect(at(document, "stopped.in")).toBe("flask");
    expect(at(document, "stopped.at.value")).toBeCloseTo(1, 3);
    const [start, half, none] = at(document, "compartments.flask.A.value.values") as (number | null)[];
    expect(start).toBe(1);
    expect(half).toBeCloseTo(2, 6);
    expect(none).toBeNull();
    expect(err).toContain("stopped at 1 min in flask");
  });
});
