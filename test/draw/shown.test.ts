import { readFileSync } from "node:fs";
import { describe, expect, test } from "vitest";
import { compile } from "../../src/compile/compile.js";
import { compared } from "../../src/draw/compared.js";
import { flowSheet } from "../../src/draw/flow-sheet.js";
import { drawNetwork, inWords } from "../../src/draw/network.js";
import { shownOfFlow, shownOfSpecies, withTones } from "../../src/draw/shown.js";
import { parseDuty } from "../../src/parse/duty.js";
import { parseNetwork } from "../../src/parse/network.js";
import { networkSettings } from "../../src/reaction/conditions.js";
import { steadyState } from "../../src/reaction/steady.js";
import { sheets } from "./sheets.js";

const read = (path: string): Uint8Array => readFileSync(path);
const networkAt = (path: string) =>
  parseNetwork(readFileSync(path, "utf8"), { path, read, allowOutside: true }).document!;
const both = networkAt("networks/demo/both.yaml").start;

describe("quantities shown as tones", () => {
  test("mean age grows from body to body by its space time; what only exchanges is older than its host by its own", () => {
    const ages = shownOfFlow(both, "mean age").values;
    const space = shownOfFlow(both, "space time").values;
    expect(ages.get("inlet-leg")).toBeCloseTo(space.get("inlet-leg")!, 6);
    // A zone that only trades is a stirred tank fed by its host.
    expect(ages.get("corner")! - ages.get("bulk")!).toBeCloseTo(space.get("corner")!, 6);
    const lives = shownOfFlow(both, "life expectancy").values;
    // All that enters the leg still has the leg, and then what the bulk's entrants have.
    expect(lives.get("inlet-leg")! - lives.get("bulk")!).toBeCloseTo(space.get("inlet-leg")!, 6);
  });

  test("what all bodies make together is what leaves more than is fed", () => {
    const path = "networks/demo/normal.yaml";
    const duty = parseDuty(readFileSync(path, "utf8"), { path, read, allowOutside: true }).document!;
    const plant = compile(networkAt("networks/demo/both.yaml"), networkSettings(duty)).plant!;
    const state = steadyState(plant, duty.chemistry, duty);
    const unit = { name: "mol/L", factor: 1000, offset: 0, dimension: [-3, 0, 0, 1, 0, 0, 0] } as const;
    const ester = state.species.indexOf("ester");
    const shown = shownOfSpecies(plant, state, "production of", ester, unit);
    expect(shown.quantity).toBe("consumption of ester");
    expect(shown.unit.name).toBe("mol/(L min)");
    const volume = new Map(flowSheet(plant).bodies.map((b) => [b.name, b.volume]));
    const consumed = [...shown.values].reduce((sum, [body, rate]) => sum + rate * volume.get(body)!, 0);
    expect(consumed).toBeCloseTo(-state.made[ester], 9);
    const concentration = shownOfSpecies(plant, state, "concentration of", ester, unit).values;
    expect(concentration.get("inlet-leg")).toBeGreaterThan(concentration.get("bulk")!);
  });

  test("the drawing says the value of each body and the ends of the scale, and tones between them", () => {
    const sheet = withTones(flowSheet(both), shownOfFlow(both, "mean age"));
    const tones = sheet.bodies.flatMap((b) => (b.tone === undefined ? [] : [b.tone]));
    expect(Math.min(...tones)).toBe(0);
    expect(Math.max(...tones)).toBe(1);
    const svg = drawNetwork(sheet, { theme: "light" });
    expect(svg).toContain(`mean age ${sheet.tones!.low}`);
    expect(svg.match(/class="toned"/g)?.length).toBe(tones.length);
    expect(inWords(sheet)).toContain("Tone of the bodies: mean age.");
    expect(svg).not.toMatch(/NaN|undefined/);
  });
});

describe("bodies of many cells", () => {
  const lattice = networkAt("networks/zoned/lattice.yaml").start;

  test("every cell is a tile of its volume and its own age, the youngest left", () => {
    const shown = shownOfFlow(lattice, "mean age");
    const cells = shown.cells!.get("core")!;
    const sheet = withTones(flowSheet(lattice), shown);
    const core = sheet.bodies.find((b) => b.name === "core")!;
    const tiles = core.tiles!.flat();
    expect(cells.volume.length).toBe(125);
    expect(tiles.reduce((sum, t) => sum + t.share, 0)).toBeCloseTo(1, 12);
    // What tiles hold together is what the cells hold: the mean of the tones is that of the ages, on the scale.
    const volume = cells.volume.reduce((a, b) => a + b, 0);
    const mean = cells.value.reduce((sum, v, k) => sum + v * cells.volume[k], 0) / volume;
    const [low, high] = [Math.min(...cells.value), Math.max(...cells.value)];
    expect(tiles.reduce((sum, t) => sum + t.share * t.tone, 0)).toBeCloseTo((mean - low) / (high - low), 12);
    const columns = core.tiles!.map((c) => c.reduce((sum, t) => sum + t.tone, 0) / c.length);
    expect(columns).toEqual([...columns].sort((a, b) => a - b));
    expect(inWords(sheet)).toContain("125 cells of");
  });

  test("a row of tanks keeps its order; each is older than the one before", () => {
    const text =
      "network: Row\nformat: 1\nfeeds: {in: {flow: 1 L/min, to: row}}\ncompartments:\n  row: {kind: stirred, volume: 4 L, repeat: 4, to: out}\noutlets: [out]\n";
    const row = parseNetwork(text, { path: "row.yaml", read }).document!.start;
    const shown = shownOfFlow(row, "mean age");
    expect(shown.cells!.get("row")!.value.map((v) => v / 60)).toEqual([1, 2, 3, 4].map((v) => expect.closeTo(v, 9)));
    expect(withTones(flowSheet(row), shown).bodies.find((b) => b.name === "row")!.tiles).toHaveLength(4);
  });

  test("where all is the same there is no scale", () => {
    const text =
      "network: One\nformat: 1\nfeeds: {in: {flow: 1 L/min, to: tank}}\ncompartments:\n  tank: {kind: stirred, volume: 4 L, to: out}\noutlets: [out]\n";
    const one = parseNetwork(text, { path: "one.yaml", read }).document!.start;
    const svg = drawNetwork(withTones(flowSheet(one), shownOfFlow(one, "mean age")), { theme: "light" });
    expect(svg).toContain("mean age 4\u2009min everywhere");
    expect(svg).not.toContain('class="tone"');
  });
});

describe("two networks compared", () => {
  test("a drawing beside itself has not moved", () => {
    const same = compared(sheets.v3, sheets.v3);
    expect(same.says).toBe("nothing moved");
    expect(same.bodies).toEqual(sheets.v3.bodies);
    expect(same.streams).toEqual(sheets.v3.streams);
  });

  test("tells what moved, what is new and what is gone", () => {
    const before = flowSheet(networkAt("networks/demo/bypass.yaml").start);
    const after = flowSheet(both);
    const sheet = compared(before, after);
    const body = (name: string) => sheet.bodies.find((b) => b.name === name)!;
    expect(body("corner")).toMatchObject({ accent: true, note: "new" });
    for (const b of before.bodies) {
      const now = after.bodies.find((a) => a.name === b.name);
      if (!now) expect(body(b.name).note).toBe("gone");
      else if (b.volume !== now.volume) expect(body(b.name).note).toMatch(/^was \d/);
      else expect(body(b.name).note).toBeUndefined();
    }
    const exchange = sheet.streams.find((s) => s.role === "exchange")!;
    expect(exchange.label).toMatch(/^new: /);
    const back = compared(after, before);
    expect(back.bodies.find((b) => b.name === "corner")).toMatchObject({ note: "gone" });
    expect(back.streams.filter((s) => s.gone).map((s) => s.role)).toContain("exchange");
    // A drawing of both counts the flow of what is there, not of what is gone.
    expect(drawNetwork(back)).toContain(">40\u2009L/min<");
  });
});
