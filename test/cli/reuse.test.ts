import { readFileSync } from "node:fs";
import { expect, test } from "vitest";
import { at, backmix, json } from "./fake.js";

const main = `network: Reactor made of a part
format: 1
feeds: {feed: {flow: 12 L/min, to: reactor}}
compartments:
  reactor: {kind: part, use: shared/parts/quiet-corner.yaml, with: {total: 900 L}, to: product}
outlets: [product]
`;
const truth = { corner: 0.3, renewal: 0.25 };

test("what a part leaves open is set, fitted and written back into its `with:`, never into the part", async () => {
  const set = Object.entries(truth).flatMap(([name, value]) => ["--set", `reactor.${name}=${value}`]);
  const curve = await json(["simulate", "r.yaml", "--pulse", "feed", "--until", "6 h", "--points", "60", ...set], {
    files: { "r.yaml": main },
  });
  const series = (key: string) => at(curve.document, `readings.0.${key}.values`) as number[];
  const [times, values] = [series("time"), series("value")];
  const files = {
    "r.yaml": main,
    "log.csv": `t,c\n${times.map((t, i) => `${t},${values[i].toPrecision(5)}`).join("\n")}\n`,
    "trial.yaml": `trial: Pulse
format: 1
injection: {at: feed, pulse: 1 g}
readings:
  - at: product
    file: log.csv
    time: {column: t, unit: ${at(curve.document, "readings.0.time.unit")}}
    value: {column: c, unit: g/L}
    scale: free
`,
  };
  const { status, document } = await json(["fit", "r.yaml", "--trial", "trial.yaml", "--starts", "4"], { files });
  expect(status).toBe(0);
  for (const [name, value] of Object.entries(truth)) {
    const { value: found, unit } = (document.parameters as Record<string, unknown>)[`reactor.${name}`] as {
      value: number;
      unit: string;
    };
    expect(found / (unit === "%" ? 100 : 1) / value).toBeCloseTo(1, 3);
  }
  const before = readFileSync("shared/parts/quiet-corner.yaml", "utf8");
  const written = await backmix(["fit", "r.yaml", "--trial", "trial.yaml", "--starts", "4", "--write"], { files });
  expect([...written.written.keys()]).toEqual(["r.yaml"]);
  expect(written.written.get("r.yaml")).toMatch(
    /with: \{total: 900 L, corner: (?:30|29\.99\d*|30\.00\d*) %, renewal: 0\.2(?:5|49|500)\d*\}, to: product\}/,
  );
  expect(readFileSync("shared/parts/quiet-corner.yaml", "utf8")).toBe(before);
});

test("the flow into a part is nobody's to set", async () => {
  const { status, err } = await backmix(["draw", "r.yaml", "--set", "reactor.feed.flow=3 L/min"], {
    files: { "r.yaml": main },
  });
  expect(status).toBe(2);
  expect(err).toContain("there is no 'reactor.feed.flow' to set");
});
