import { existsSync, readFileSync } from "node:fs";
import { describe, expect, test } from "vitest";
import { backmix } from "./cli/fake.js";
import { demoLog, logs, tourSamples } from "./networks/demo-logs.js";

const readme = readFileSync("README.md", "utf8");
const blocks = [...readme.matchAll(/^```(\w+)\n(.*?)^```$/gms)].map(([, language, body]) => ({ language, body }));

describe("the README tells the truth", () => {
  const yaml = blocks.filter((b) => b.language === "yaml");
  test.each(yaml.map((b) => [b.body.split("\n")[0].slice(2), b.body]))("%s is the file of that name", (path, body) => {
    const [modeline, ...rest] = readFileSync(path, "utf8").split("\n");
    expect(modeline).toMatch(/^# yaml-language-server/);
    expect(body.split("\n").slice(1).join("\n")).toBe(rest.join("\n"));
  });

  const consoles = blocks.filter((b) => b.language === "console");
  test.each(consoles.map((b) => [b.body.split("\n")[0], b.body]))("%s prints what it says", async (prompt, body) => {
    const line = prompt.replace(/^\$ backmix /, "");
    const { out } = await backmix(line.split(" "));
    expect(out.trimEnd()).toBe(body.split("\n").slice(1).join("\n").trimEnd());
  });

  test("every picture and link of its own is there", () => {
    const targets = [...readme.matchAll(/\]\(([^)]+)\)/g)].map((m) => m[1]).filter((t) => !t.includes("://"));
    expect(targets.length).toBeGreaterThan(3);
    expect(targets.filter((t) => !existsSync(t))).toEqual([]);
  });

  test("its pictures are what the program draws today", async () => {
    const picture = (name: string) => readFileSync(`networks/tour/${name}.svg`, "utf8").trimEnd();
    const { out } = await backmix(["draw", "networks/tour/corner.yaml"]);
    expect(out.trimEnd()).toBe(picture("corner"));
    const heat = ["simulate", "networks/heat/tank.yaml", "--duty", "networks/heat/cooled.yaml"];
    const states = ["--states", "feed.temperature=5 degC..45 degC", "-o", "states.svg"];
    const drawn = (await backmix([...heat, ...states])).written.get("states.svg");
    expect(drawn?.trimEnd()).toBe(readFileSync("networks/heat/states.svg", "utf8").trimEnd());
    const { written } = await backmix(["study", "networks/tour/study.yaml"]);
    const rivals = [...written].find(([path]) => path.endsWith("figures/rivals-1.svg"))?.[1];
    expect(rivals?.trimEnd()).toBe(picture("rivals"));
  });

  test("the set-up is two commands that package.json has", () => {
    const setup = blocks.find((b) => b.language === "sh")?.body ?? "";
    const { scripts } = JSON.parse(readFileSync("package.json", "utf8"));
    const commands = setup
      .trim()
      .split("\n")
      .map((l) => l.split("#")[0].trim());
    expect(commands).toEqual(["npm start", "npm test"]);
    expect(Object.keys(scripts)).toEqual(expect.arrayContaining(["start", "test"]));
  });
});

describe("demo data are what their makers say", () => {
  test.each(logs.map((l) => [l.trial, l] as const))("%s.csv", (trial, log) => {
    expect(readFileSync(`networks/demo/${trial}.csv`, "utf8")).toBe(demoLog(log));
  });
  test("the tour's samples", () => {
    expect(readFileSync("networks/tour/salt.csv", "utf8")).toBe(tourSamples());
  });
});
