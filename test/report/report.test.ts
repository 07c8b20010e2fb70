import { describe, expect, test } from "vitest";
import { allFigures } from "../../src/report/all-figures.js";
import { cautionsFor } from "../../src/report/cautions.js";
import type { StudyReport } from "../../src/report/input.js";
import { writeSummary } from "../../src/report/markdown.js";
import { writeReport } from "../../src/report/report.js";
import { nestedWords } from "../../src/report/study/nested-words.js";
import { demo } from "./demo.js";

describe("the report page", () => {
  const page = writeReport(demo);

  test("needs nothing but itself", () => {
    expect(page.replaceAll('xmlns="http://www.w3.org/2000/svg"', "")).not.toMatch(
      /https?:|<script[^>]* src|<link|@import|src=|url\((?!#)/,
    );
  });

  test("reads in the agreed order", () => {
    const order = [
      "answer",
      "vessel",
      "data",
      "curves",
      "findings",
      "rivals",
      "parameters",
      "identifiability",
      "residence",
      "predictions",
      "changes",
      "aims",
      "sweeps",
      "regulated",
      "assumptions",
      "cautions",
      "provenance",
    ];
    expect([...page.matchAll(/<section id="([^"]+)"/g)].map((m) => m[1])).toEqual(order);
    expect(page.indexOf('class="answer"')).toBeLessThan(page.indexOf('id="vessel"'));
  });

  test("opens and closes its elements in order", () => {
    expect(unbalanced(page)).toEqual([]);
  });

  test("has ids and link targets that fit", () => {
    const ids = [...page.matchAll(/ id="([^"]+)"/g)].map((m) => m[1]);
    expect(new Set(ids).size).toBe(ids.length);
    for (const [, target] of page.matchAll(/(?:href="|url\()#([\w-]+)/g)) expect(ids).toContain(target);
  });

  test("gives every table a caption and headings, every drawing its words", () => {
    for (const [, body] of page.matchAll(/<table>(.*?)<\/table>/gs)) {
      expect(body).toMatch(/^<caption>[^<]+<\/caption><thead><tr><th scope="col"/);
      expect(body).toContain('<th scope="row">');
    }
    const drawings = [...page.matchAll(/<figure[^>]*>(.*?)<\/figure>/gs)].map((m) => m[1]);
    expect(drawings.length).toBeGreaterThanOrEqual(5);
    for (const d of drawings) expect(d).toMatch(/role="img"><title>[^<]+<\/title><desc>[^<]+<\/desc>.*<figcaption>/s);
  });

  test("shows the figures that are kept beside it, each once and in the same order", () => {
    const names = allFigures(demo).map((f) => f.name);
    expect([...page.matchAll(/<figure [^>]*data-name="([^"]+)"/g)].map((m) => m[1])).toEqual(names);
    expect(names).toEqual(expect.arrayContaining(["prediction-1", "change-1", "spread-1"]));
    expect(new Set(names).size).toBe(names.length);
  });

  test("says every number's unit and interval, and what cannot be told", () => {
    expect(page).toContain("80.1 to 84.2");
    expect(page).toContain("not estimable");
    expect(page).toContain("at its lower bound");
    expect(withoutScripts(page)).not.toMatch(/undefined|NaN|\[object/);
  });

  test("says where it comes from", () => {
    for (const f of demo.provenance.files) expect(page).toContain(f.sha256);
    expect(page).toContain(demo.provenance.command);
  });

  test("leaves out what there is nothing to say about", () => {
    const bare = writeReport(nothing);
    expect([...bare.matchAll(/<section id="([^"]+)"/g)].map((m) => m[1])).toEqual(["answer", "cautions", "provenance"]);
    expect(unbalanced(bare)).toEqual([]);
  });

  test("makes words safe", () => {
    const evil = {
      ...demo,
      title: "<img onerror=x>",
      answer: [{ about: "<b>", says: "<b>" }],
      assumptions: ["a & <i>"],
    };
    expect(writeReport(evil)).not.toMatch(/<img|<b>|<i>/);
  });
});

describe("the summary", () => {
  test("keeps words from becoming marks and tables in shape", () => {
    const md = writeSummary({ ...demo, title: "A *bold* [claim]", rivals: [{ ...demo.rivals[0], verdict: "a | b" }] });
    expect(md).toContain("# A \\*bold\\* \\[claim\\]");
    expect(md).toContain("a \\| b |");
    for (const [row] of md.matchAll(/^\|.*\|$/gm))
      expect(row.replaceAll("\\|", "").split("|").length).toBeGreaterThan(4);
  });

  test("fits a page", () => {
    expect(writeSummary(demo).split("\n").length).toBeLessThan(66);
  });
});

describe("cautions", () => {
  test("what was tested is always said, others only where they apply", () => {
    expect(cautionsFor({}).map((c) => c.about)).toEqual(["Tested conditions only"]);
    expect(cautionsFor({ disinfection: true, heat: false }).map((c) => c.about)).toContain("Disinfection credit");
    expect(cautionsFor({ heat: true })[0].says).toContain("runaway");
    expect(cautionsFor({ extrapolated: ["feed 12 L/min, tested up to 10 L/min"] })[0].says).toContain(
      "tested up to 10 L/min",
    );
  });
});

const nothing: StudyReport = {
  title: "Nothing yet",
  answer: [],
  curves: [],
  data: [],
  findings: [],
  notSupported: [],
  rivals: [],
  equals: [],
  parameters: [],
  rivalCurves: [],
  identifiability: { says: [], correlations: [], figures: [] },
  residence: [],
  predictions: [],
  changes: [],
  along: [],
  inTime: [],
  decisions: [],
  regulated: [],
  sweeps: [],
  aims: [],
  assumptions: [],
  cautions: {},
  tested: [],
  provenance: { files: [], seed: 1, version: "0", command: "backmix study x.yaml" },
};

const withoutScripts = (page: string): string => page.replace(/(<script[^>]*>)[\s\S]*?<\/script>/g, "$1</script>");

/** Elements that are closed out of order or not at all. */
function unbalanced(page: string): string[] {
  const html = withoutScripts(page);
  const empty = new Set(["meta", "br"]);
  const open: string[] = [];
  const wrong: string[] = [];
  for (const [, close, name, self] of html.matchAll(/<(\/?)([a-zA-Z][\w]*)(?:\s[^<>]*?)?(\/?)>/g)) {
    if (self || empty.has(name)) continue;
    if (!close) open.push(name);
    else if (open.pop() !== name) wrong.push(name);
  }
  return [...wrong, ...open];
}

test("a ratio of variances beyond a thousand needs no digits", () => {
  const nested = {
    special: "A",
    general: "B",
    f: 2.41e7,
    freedom: [1, 1540] as [number, number],
    p: 0,
    atBound: false,
  };
  expect(nestedWords(nested)).toContain("(F above 1000 on 1 and 1540 degrees of freedom, p below 0.0001)");
  expect(nestedWords({ ...nested, f: 12.34 })).toContain("(F 12.3 on");
});
