import { readFileSync } from "node:fs";
import type { Download, Page } from "playwright-core";
import { describe, expect, test } from "vitest";
import { allFigures } from "../../src/report/all-figures.js";
import { writeReport } from "../../src/report/report.js";
import { demo } from "../report/demo.js";
import { describeInBrowser } from "./browser.js";
import { faintWords } from "./contrast.js";

/** Sheets of paper less the margins of the page's style, px at 96 per inch. */
const sheets = {
  A4: { width: ((210 - 28) / 25.4) * 96, height: ((297 - 28) / 25.4) * 96 },
  Letter: { width: ((215.9 - 28) / 25.4) * 96, height: ((279.4 - 28) / 25.4) * 96 },
} as const;

describeInBrowser("the report in a browser", ({ open }) => {
  const html = writeReport(demo);

  describe.each(["light", "dark"] as const)("%s", (scheme) => {
    test("opens without complaints or requests, with readable words", async () => {
      const { page, complaints, requests } = await open(html, { scheme });
      expect(await page.title()).toBe(demo.title);
      expect(await faintWords(page)).toEqual([]);
      expect(complaints).toEqual([]);
      expect(requests).toEqual([]);
      const paper = await page.evaluate<string>("getComputedStyle(document.body).backgroundColor");
      expect(paper).toBe(scheme === "light" ? "rgb(255, 255, 255)" : "rgb(16, 24, 27)");
    });
  });

  test.each([360, 1600])("needs no sideways scrolling at %d px", async (width) => {
    const { page } = await open(html, { width });
    expect(await page.evaluate<number>("document.documentElement.scrollWidth")).toBeLessThanOrEqual(width);
    // A drawing that is wider than the screen scrolls by itself, so that its words stay readable.
    const sizes = await page.evaluate<number[]>(
      `[...document.querySelectorAll("figure text")].map((t) => t.getBoundingClientRect().height)`,
    );
    expect(Math.min(...sizes)).toBeGreaterThan(7.5);
  });

  test("every picture has a title and a description", async () => {
    const { page } = await open(html);
    const drawings = await page.evaluate<[string, string, string][]>(
      `[...document.querySelectorAll("figure svg")].map((s) => [s.getAttribute("role"), s.querySelector("title").textContent, s.querySelector("desc").textContent])`,
    );
    expect(drawings.length).toBeGreaterThan(6);
    for (const [role, title, says] of drawings) {
      expect(role).toBe("img");
      expect(title.length).toBeGreaterThan(3);
      expect(says.length).toBeGreaterThan(10);
    }
  });

  test.each(["A4", "Letter"] as const)("prints on %s with no figure cut", async (format) => {
    const { width, height } = sheets[format];
    const { page } = await open(html, { width: Math.floor(width) });
    const pdf = await page.pdf({ format, preferCSSPageSize: false });
    expect(pdf.subarray(0, 5).toString()).toBe("%PDF-");
    expect(pdf.toString("latin1")).toMatch(/\/Type\s*\/Page\b/);
    await page.emulateMedia({ media: "print" });
    // As the page lays it out on paper, words in drawings of a column's width are set in 7 points or more.
    const points = await page.evaluate<number[]>(
      `[...document.querySelectorAll("figure:not(.wide) svg")].map((s) => (s.getBoundingClientRect().width / s.viewBox.baseVal.width) * 11 * 0.75)`,
    );
    expect(points.length).toBeGreaterThan(3);
    expect(Math.min(...points)).toBeGreaterThan(7);
    const boxes = await page.evaluate<{ left: number; right: number; height: number; breaks: string }[]>(
      `[...document.querySelectorAll("figure")].map((f) => { const { left, right } = f.querySelector("svg").getBoundingClientRect(); return { left, right, height: f.getBoundingClientRect().height, breaks: getComputedStyle(f).breakInside }; })`,
    );
    for (const b of boxes) {
      expect(b.left).toBeGreaterThanOrEqual(0);
      expect(b.right).toBeLessThanOrEqual(width + 0.5);
      // As it fits on one sheet and may not be broken, no figure is cut between two.
      expect(b.height).toBeLessThan(height);
      expect(b.breaks).toBe("avoid");
    }
    const tables = await page.evaluate<number[]>(
      `[...document.querySelectorAll("table")].map((t) => t.getBoundingClientRect().right)`,
    );
    expect(Math.max(...tables)).toBeLessThanOrEqual(width + 0.5);
    expect(await page.evaluate<number>(`document.querySelectorAll("nav, .tools").length`)).toBeGreaterThan(1);
    expect(await page.locator("nav").isVisible()).toBe(false);
    expect(await page.locator(".tools").first().isVisible()).toBe(false);
  });

  test("the answer fills no more than half a page", async () => {
    const { page } = await open(html, { width: Math.floor(sheets.A4.width) });
    await page.emulateMedia({ media: "print" });
    const box = await page.locator(".answer").boundingBox();
    expect((box?.y ?? 0) + (box?.height ?? 0)).toBeLessThan(sheets.A4.height / 2);
    const size = await page.evaluate<string>(`getComputedStyle(document.querySelector(".answer dd")).fontSize`);
    expect(Number.parseFloat(size) * 0.75).toBeLessThan(10.5);
    // Nothing sends it to the second sheet: less than a sheet of it is one sheet of paper.
    await page.evaluate(`document.querySelectorAll("main > section:not(#answer), footer").forEach((e) => e.remove())`);
    const pdf = (await page.pdf({ format: "A4" })).toString("latin1");
    expect(pdf.match(/\/Type\s*\/Page\b/g)?.length).toBe(1);
  });

  const fit = "#figure-fit-1";
  const told = async (page: Page): Promise<string> => (await page.locator(`${fit} .told`).textContent()) ?? "";

  test("the pointer reads values off the curve", async () => {
    const { page, complaints } = await open(html);
    const drawing = page.locator(`${fit} svg`);
    await drawing.scrollIntoViewIfNeeded();
    const box = (await drawing.boundingBox())!;
    await page.mouse.move(box.x + box.width * 0.5, box.y + box.height * 0.4);
    const said = /time ([\d.]+) min: measured ([\d.e\u2212-]+), fitted ([\d.e\u2212-]+)/.exec(await told(page));
    expect(said).not.toBeNull();
    const k = 4 * Math.round(Number(said![1]) / 4);
    // The demo's curve: 0.05 exp(-(t - 15)/76) from 15 min on.
    expect(Number(said![3].replace("\u2212", "-"))).toBeCloseTo(0.05 * Math.exp(-(k - 15) / 76), 5);
    expect(await page.locator(`${fit} .readout circle`).count()).toBe(2);
    await page.mouse.move(box.x + 1, 1);
    expect(await page.locator(`${fit} .readout *`).count()).toBe(0);
    expect(complaints).toEqual([]);
  });

  test("the arrow keys walk along it, and what they read is announced", async () => {
    const { page } = await open(html);
    await page.locator(`${fit} .drawing`).focus();
    await page.keyboard.press("Home");
    expect(await told(page)).toContain("time 0 min");
    await page.keyboard.press("ArrowRight");
    expect(await told(page)).toContain("time 4 min");
    await page.keyboard.press("End");
    expect(await told(page)).toContain("time 356 min");
    await page.keyboard.press("ArrowRight");
    expect(await told(page)).toContain("time 356 min");
    await page.keyboard.press("Escape");
    expect(await page.locator(`${fit} .readout *`).count()).toBe(0);
    expect(await page.locator(`${fit} .told`).getAttribute("role")).toBe("status");
    expect(await page.locator(`${fit} .drawing`).getAttribute("aria-label")).toContain("arrow keys");
  });

  test("every figure is saved as a drawing that stands by itself", async () => {
    const { page, requests } = await open(html);
    const figures = await page.locator("figure").count();
    expect(await page.getByRole("button", { name: "Save as SVG" }).count()).toBe(figures);
    for (const name of ["vessel", "fit-1"]) {
      const svg = await saved(page, `#figure-${name}`, "Save as SVG", `${name}.svg`);
      expect(svg).toMatch(/^<svg[^>]*xmlns="http:\/\/www.w3.org\/2000\/svg"/);
      expect(svg).toContain("<style>");
      expect(svg).not.toMatch(/var\(|@media|readout/);
      const alone = await open(`<!doctype html><title>x</title>${svg}`);
      const paper = `getComputedStyle(document.querySelector("rect.paper")).fill`;
      expect(await alone.page.evaluate<string>(paper)).toBe("rgb(255, 255, 255)");
    }
    expect(requests.filter((r) => !r.startsWith("blob:"))).toEqual([]);
  });

  test("its numbers are saved as a table", async () => {
    const { page } = await open(html);
    const rows = (await saved(page, fit, "Save data as CSV", "fit-1.csv")).trimEnd().split("\n");
    expect(rows[0]).toBe('"time, min","measured, g/L","fitted, g/L","residual, g/L"');
    expect(rows.length).toBe(91);
    const [t, , fitted] = rows[20].split(",").map(Number);
    expect(t).toBe(76);
    expect(fitted).toBeCloseTo(0.05 * Math.exp(-61 / 76), 7);
    const vessel = (await saved(page, "#figure-vessel", "Save data as CSV", "vessel.csv")).split("\n");
    expect(vessel[0]).toBe("what,name,to,value,unit");
    expect(vessel).toContain("body,bulk,,650,L");
  });

  test("every kind of figure has its numbers as a table, and is read by the keyboard alone", async () => {
    let { page, complaints } = await open(html);
    const names = await page.evaluate<string[]>(`[...document.querySelectorAll("figure")].map((f) => f.dataset.name)`);
    expect(names).toEqual(allFigures(demo).map((f) => f.name));
    const kinds = new Map(names.map((name) => [name.replace(/-\d.*$/, ""), name]));
    for (const [k, name] of [...kinds.values()].entries()) {
      // The browser holds back what one page would save more than twenty times in a row.
      if (k % 5 === 4) ({ page, complaints } = await open(html));
      const figure = `#figure-${name}`;
      const rows = (await saved(page, figure, "Save data as CSV", `${name}.csv`)).trimEnd().split("\n");
      expect(rows.length, name).toBeGreaterThan(1);
      expect(new Set(rows.map((r) => cells(r))).size, name).toBe(1);
      expect(await saved(page, figure, "Save as SVG", `${name}.svg`)).toMatch(
        /^<svg[^>]*>\s*<title>[^<]+<\/title>\s*<desc>[^<]+/,
      );
      if (name === "vessel") continue; // its labels say it all
      await page.locator(`${figure} .drawing`).focus();
      await page.keyboard.press("ArrowRight");
      await page.keyboard.press("ArrowRight");
      expect(await page.locator(`${figure} .told`).textContent(), name).toMatch(/\d/);
      expect(await page.locator(`${figure} .readout *`).count(), name).toBeGreaterThan(0);
      expect(complaints).toEqual([]);
    }
  });

  test("the pointer reads the rows of bars and intervals", async () => {
    const { page } = await open(html);
    for (const [name, said] of [
      ["spread-1", /^k2: share of the variance, % 71$/],
      ["change-1", /^baffle: conversion of A, .* 85\.1; low 83\.2; high 87\.1$/],
    ] as const) {
      const drawing = page.locator(`#figure-${name} svg`);
      await drawing.scrollIntoViewIfNeeded();
      const box = (await drawing.boundingBox())!;
      await page.mouse.move(box.x + box.width * 0.5, box.y + box.height * 0.2);
      expect(await page.locator(`#figure-${name} .told`).textContent()).toMatch(said);
    }
  });

  test("what scrolls sideways on a phone shows it and is reached by the keyboard", async () => {
    const { page } = await open(html, { width: 360 });
    const tables = await page.evaluate<{ wide: boolean; focus: boolean; named: boolean; shadow: boolean }[]>(
      `[...document.querySelectorAll(".scroll")].map((b) => ({ wide: b.scrollWidth > b.clientWidth + 1, focus: b.tabIndex === 0, named: !!b.getAttribute("aria-label"), shadow: getComputedStyle(b).backgroundImage.includes("gradient") }))`,
    );
    expect(tables.some((t) => t.wide)).toBe(true);
    for (const t of tables) {
      expect(t.focus).toBe(t.wide);
      expect(t.shadow).toBe(true);
      if (t.wide) expect(t.named).toBe(true);
    }
    const hint = `getComputedStyle(document.querySelector("figure.wide figcaption"), "::before").content`;
    expect(await page.evaluate<string>(hint)).toContain("sideways");
  });

  test("rows of tables are as high on a phone as what is seen of them", async () => {
    const { page } = await open(html, { width: 360 });
    // Of a row's cells the one that makes it high may be scrolled out of sight, but by no more than two lines.
    const blank = await page.evaluate<number[]>(
      `[...document.querySelectorAll("tbody tr")].map((r) => { const cells = [...r.cells]; const text = (c) => { const range = document.createRange(); range.selectNodeContents(c); return range.getBoundingClientRect().height; }; const all = Math.max(...cells.map(text)); const seen = Math.max(...cells.filter((c) => c.getBoundingClientRect().left < 360).map(text)); return all - seen; })`,
    );
    expect(Math.max(...blank)).toBeLessThan(50);
  });

  test("headings go down one rank at a time, tables have captions and headed columns and rows", async () => {
    const { page } = await open(html);
    const ranks = await page.evaluate<number[]>(
      `[...document.querySelectorAll("h1,h2,h3,h4,h5,h6")].map((h) => Number(h.tagName[1]))`,
    );
    expect(ranks[0]).toBe(1);
    for (let k = 1; k < ranks.length; k++) expect(ranks[k] - ranks[k - 1]).toBeLessThanOrEqual(1);
    const tables = await page.evaluate<boolean[]>(
      `[...document.querySelectorAll("table")].map((t) => !!t.caption && [...t.tHead.rows[0].cells].every((c) => c.scope === "col") && [...t.tBodies[0].rows].every((r) => r.cells[0].scope === "row"))`,
    );
    expect(tables.length).toBeGreaterThan(5);
    expect(tables).not.toContain(false);
    expect(await page.locator("html").getAttribute("lang")).toBe("en");
  });

  test("the keyboard comes first to a way past the contents, then goes down the page", async () => {
    const { page } = await open(html);
    await page.keyboard.press("Tab");
    expect(await page.evaluate<string>(`document.activeElement.textContent`)).toBe("To the answer");
    expect(await page.locator(".skip").isVisible()).toBe(true);
    await page.keyboard.press("Enter");
    expect(await page.evaluate<string>(`document.activeElement.id`)).toBe("answer");
    const tops: number[] = [];
    for (let k = 0; k < 25; k++) {
      await page.keyboard.press("Tab");
      tops.push(
        await page.evaluate<number>(
          `document.activeElement.getBoundingClientRect().top + document.scrollingElement.scrollTop`,
        ),
      );
    }
    // Figures stand in columns: within a row their buttons may lie a little higher than those of the one before.
    for (let k = 1; k < tops.length; k++) expect(tops[k]).toBeGreaterThan(tops[k - 1] - 600);
    expect(tops[tops.length - 1]).toBeGreaterThan(tops[0]);
  });

  test("moves nothing by itself where motion is not wanted", async () => {
    const { page } = await open(html);
    await page.emulateMedia({ reducedMotion: "reduce" });
    const moving = `[...document.querySelectorAll("*")].filter((e) => { const s = getComputedStyle(e); return s.scrollBehavior === "smooth" || s.animationName !== "none" || Number.parseFloat(s.transitionDuration) > 0; }).length`;
    expect(await page.evaluate<number>(moving)).toBe(0);
  });

  test("has landmarks, one heading of the first rank, and names for what can be focused", async () => {
    const { page } = await open(html);
    for (const landmark of ["main", "nav", "header", "footer", "h1"]) {
      expect(await page.locator(landmark).count()).toBe(1);
    }
    const nameless = await page.evaluate<number>(
      `[...document.querySelectorAll("button, a, [tabindex]")].filter((e) => !(e.textContent.trim() || e.getAttribute("aria-label"))).length`,
    );
    expect(nameless).toBe(0);
  });
});

/** Cells of a line of CSV. */
const cells = (line: string): number => line.replace(/"(?:[^"]|"")*"/g, "").split(",").length;

async function saved(page: Page, figure: string, button: string, as: string): Promise<string> {
  const wait = page.waitForEvent("download");
  await page.locator(figure).getByRole("button", { name: button }).click();
  const download: Download = await wait;
  expect(download.suggestedFilename()).toBe(as);
  return readFileSync(await download.path(), "utf8");
}
