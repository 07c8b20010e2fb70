import { describe, expect, test } from "vitest";
import { parseAny } from "../../src/parse/any.js";
import { parseChemistry } from "../../src/parse/chemistry.js";
import { parseDuty } from "../../src/parse/duty.js";
import { parseStudy } from "../../src/parse/study.js";
import { parseTrial } from "../../src/parse/trial.js";
import { printProblems } from "../../src/problems/print.js";
import { codes, type Library, network, networkOf, parse, plantOf } from "./parts.js";

const tank = network(`notes: as drawn
constants: {total: 100 L}
parameters: {bypass: {value: 10 %, between: [0 %, 60 %]}}
feeds: {feed: {flow: 10 L/min, to: {tank: rest, out: bypass}}}
compartments:
  tank: {kind: stirred, volume: total, repeat: 3, to: out}
outlets: [out]`);
const variant = (base: string, change: string, more = "") =>
  `network: Variant\nformat: 1\n${more}based-on: ${base}\nchange: ${change}\n`;

describe("a network", () => {
  test("takes what is different, keeps the rest, and has its own title", () => {
    const library = {
      "base/tank.yaml": tank,
      "main.yaml": variant(
        "base/tank.yaml",
        "{parameters: {bypass: {value: 20 %}}, compartments: {tank: {repeat: null}}}",
      ),
    };
    const document = networkOf(library);
    expect([document.title, document.notes, document.path]).toEqual(["Variant", "as drawn", "main.yaml"]);
    expect(document.compartments[0].counts).toEqual({});
    const {
      env,
      network: { names },
    } = plantOf(library);
    expect(env[names.find((n) => n.name === "bypass")?.slot ?? -1]).toBe(0.2);
    // Every value keeps the file in which it is written.
    expect(names.map((n) => [n.name, n.value.at.source.path])).toEqual([
      ["total", "base/tank.yaml"],
      ["bypass", "main.yaml"],
      ["feed.flow", "base/tank.yaml"],
    ]);
  });

  test("a variant of a variant, each relative to its own file", () => {
    const library = {
      "base/tank.yaml": tank,
      "base/wide.yaml": variant("tank.yaml", "{constants: {total: 300 L}}", "notes: after the rebuild\n"),
      "main.yaml": variant("base/wide.yaml", "{feeds: {feed: {flow: 5 L/min}}}"),
    };
    const plant = plantOf(library);
    expect([plant.volume.total, plant.feeds[0].flow * 60_000, plant.network.notes]).toEqual([
      0.3,
      expect.closeTo(5, 12),
      "after the rebuild",
    ]);
  });

  test("a whole variant equals the same written out", () => {
    const changed =
      "{compartments: {tank: {kind: tubular, volume: total, to: tail}, tail: {kind: stirred, volume: 5 L, to: out}}}";
    const out = tank
      .replace("{kind: stirred, volume: total, repeat: 3, to: out}", "{kind: tubular, volume: total, to: tail}")
      .replace("outlets:", "  tail: {kind: stirred, volume: 5 L, to: out}\noutlets:");
    const [a, b] = [{ "tank.yaml": tank, "main.yaml": variant("tank.yaml", changed) }, { "main.yaml": out }].map((l) =>
      plantOf(l),
    );
    expect(a.streams.map((s) => [s.from, s.to, s.flow])).toEqual(b.streams.map((s) => [s.from, s.to, s.flow]));
    expect([...a.nodes].map((n) => [n.name, n.volume])).toEqual([...b.nodes].map((n) => [n.name, n.volume]));
  });

  test("a variant may be a part, and a part may be changed", () => {
    const library: Library = {
      "tank.yaml": tank,
      "wide.yaml": variant("tank.yaml", "{constants: {total: 300 L}}"),
      "plant.yaml": network(`feeds: {feed: {flow: 2 L/min, to: a}}
compartments: {a: {kind: part, use: wide.yaml, to: out}}
outlets: [out, waste]`).replace(", waste", ""),
      "main.yaml": variant(
        "plant.yaml",
        "{compartments: {a: {with: {total: 50 L}, to: {out: {b: 30 %, out: rest}}}, b: {kind: stirred, volume: 1 L, to: out}}}",
      ),
    };
    expect(networkOf(library, "plant.yaml").names.find((n) => n.name === "a.total")?.role).toBe("constant");
    expect(plantOf(library).volume.total).toBeCloseTo(0.051, 12);
  });

  test("what is wrong is told where it is written, with the way there", () => {
    const library = {
      "tank.yaml": tank.replace("volume: total,", "volume: totl,"),
      "wide.yaml": variant("tank.yaml", "{constants: {total: 300 L}}"),
      "main.yaml": variant("wide.yaml", "{compartments: {tank: {volum: 3 L}}, outlets: null, feeds: {fed: null}}"),
    };
    expect(codes(parse(library).problems)).toEqual(["unknown-key main.yaml volum"]);
    const mended = { ...library, "main.yaml": library["main.yaml"].replace("volum: 3 L", "to: out") };
    expect(codes(parse(mended).problems)).toEqual(["nothing-to-remove main.yaml fed"]);
    const again = { ...library, "main.yaml": variant("wide.yaml", "{constants: {total: 200 L}}") };
    const { problems } = parse(again);
    expect(codes(problems)).toContain("unknown-name tank.yaml totl");
    expect(printProblems(problems)).toContain("  base of wide.yaml:3:11\n  base of main.yaml:3:11\n");
  });
});

describe("the other documents", () => {
  const files: Library = {
    "base/log.csv": "t,c\n0,0\n1,1\n2,0.5\n",
    "base/tank.yaml": tank,
    "base/c.yaml":
      "chemistry: C\nformat: 1\nspecies: {A: {}, P: {}}\nconstants: {k: 0.5 1/min}\nreactions: [{equation: A -> P, rate: k * A}]\n",
    "base/trial.yaml":
      "trial: T\nformat: 1\nvessel: tank.yaml\ninjection: {at: feed, pulse: 1 g}\nreadings:\n  - {at: out, file: log.csv, time: {column: t, unit: min}, value: {column: c, unit: g/L}}\n",
    "base/duty.yaml": "duty: D\nformat: 1\nchemistry: c.yaml\nfeeds: {feed: {A: 1 mol/L}}\n",
    "base/study.yaml": "study: S\nformat: 1\nrivals: [tank.yaml]\nseed: 3\n",
  };
  const read = (path: string) => files[path];
  const based = (kind: string, file: string, change: string) =>
    `${kind}: Mine\nformat: 1\nbased-on: base/${file}.yaml\nchange: ${change}\n`;
  const options = { path: "main.yaml", read };

  test("a trial: its table and vessel lie beside the file that names them", () => {
    const { document, problems } = parseTrial(based("trial", "trial", "{flows: {feed: 5 L/min}}"), options);
    expect(printProblems(problems)).toBe("");
    expect([document?.title, document?.vessel, document?.flows.size]).toEqual(["Mine", "base/tank.yaml", 1]);
    expect(document?.readings[0].series?.time.length).toBe(3);
    expect(parseAny(based("trial", "trial", "{flows: {fed: 5 L/min}}"), options).problems.map((p) => p.code)).toEqual([
      "unknown-place",
    ]);
  });

  test("a duty, a chemistry, a study", () => {
    const duty = parseDuty(based("duty", "duty", "{feeds: {feed: {A: 2 mol/L}}}"), options).document;
    expect([duty?.title, duty?.chemistry?.title]).toEqual(["Mine", "C"]);
    expect(duty?.feeds.get("feed")?.species.get("A")?.value.of([])).toBe(2000);
    const chemistry = parseChemistry(based("chemistry", "c", "{constants: {k: 2 1/min}}"), options).document;
    expect(chemistry?.constants[0].value.of([])).toBeCloseTo(2 / 60, 15);
    const study = parseStudy(based("study", "study", "{seed: 8}"), options).document;
    expect([study?.seed, study?.rivals.map((r) => r.path)]).toEqual([8, ["base/tank.yaml"]]);
  });

  test.each(["trial", "duty", "chemistry", "study"])("a %s that is a change needs a base", (kind) => {
    const text = based(kind, "x", "{notes: null}").replace(/based-on.*\n/, "");
    expect(parseAny(text, options).problems.map((p) => p.code)).toContain("missing-key");
  });

  test("a base of another kind is refused", () => {
    expect(parseAny(based("trial", "duty", "{flows: {feed: 5 L/min}}"), options).problems.map((p) => p.code)).toEqual([
      "wrong-document",
    ]);
  });
});
