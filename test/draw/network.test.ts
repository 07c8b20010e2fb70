import { describe, expect, test } from "vitest";
import { drawNetwork, inWords } from "../../src/draw/network.js";
import { sheets } from "./sheets.js";

test.each(["v3", "loop"])("drawing of %s", async (name) => {
  const svg = drawNetwork(sheets[name], { theme: "light" }).replaceAll("><", ">\n<");
  await expect(svg).toMatchFileSnapshot(`drawings/${name}.svg`);
});

describe("a drawing stands by itself", () => {
  const svg = drawNetwork(sheets.parallel);

  test("has a title and a description that names every body and stream", () => {
    expect(svg).toContain("<title>Two paths, one with a slow side</title>");
    for (const b of sheets.parallel.bodies) expect(inWords(sheets.parallel)).toContain(b.name);
    expect(svg).toContain("lower exchanges 0.4\u2009L/min with lee");
  });

  test("prints every number rounded to 0.01 px and nothing undefined", () => {
    const drawing = svg.replace(/<style>.*?<\/style>/s, "").replace(/<desc>.*?<\/desc>/s, "");
    expect(drawing).not.toMatch(/\d\.\d{3}|NaN|undefined|Infinity/);
  });

  test("refers to nothing outside itself", () => {
    expect(svg.replace('xmlns="http://www.w3.org/2000/svg"', "")).not.toMatch(/https?:|href=|@import|src=/);
  });

  test("is the same every time", () => {
    expect(drawNetwork(sheets.parallel)).toBe(svg);
  });

  test("makes words of the file safe", () => {
    const evil = { ...sheets["one-tank"], title: `<script>"&` };
    expect(drawNetwork(evil)).not.toContain("<script>");
  });
});
