import type { Svg } from "./svg.js";

/** Colours by what they mean. One hue for liquid, one accent for what the reader should look at, grey for the rest. */
export interface Palette {
  readonly paper: string;
  readonly ink: string;
  /** Second-rank text, axes. */
  readonly quiet: string;
  readonly faint: string;
  readonly liquid: string;
  /** Ends of the tint that ages along a tube. */
  readonly young: string;
  readonly old: string;
  readonly wall: string;
  readonly stream: string;
  /** Streams that go back. */
  readonly back: string;
  readonly still: string;
  readonly hatch: string;
  readonly accent: string;
  readonly accentSoft: string;
}

export const palettes: Readonly<Record<"light" | "dark", Palette>> = {
  light: {
    paper: "#ffffff",
    ink: "#14242a",
    quiet: "#52636a",
    faint: "#c3ccd0",
    liquid: "#a8d0d3",
    young: "#e4f1f1",
    old: "#5a9ea8",
    wall: "#1f5560",
    stream: "#3f8794",
    back: "#bcd9dc",
    still: "#f3f5f5",
    hatch: "#7c8a8f",
    accent: "#b04408",
    accentSoft: "#f6d9c6",
  },
  dark: {
    paper: "#10181b",
    ink: "#e7eff1",
    quiet: "#a5b5ba",
    faint: "#3a4a50",
    liquid: "#2b5a64",
    young: "#1a343a",
    old: "#5c9faa",
    wall: "#93c9d1",
    stream: "#62abb7",
    back: "#2f525a",
    still: "#1a2529",
    hatch: "#83949a",
    accent: "#f59a5b",
    accentSoft: "#5a3219",
  },
};

/** `auto` follows the reader's screen and prints light; a fixed theme has no variables, for renderers that know none. */
export type Theme = "auto" | "light" | "dark";

/** A metric-compatible family on every system: text is measured with its widths (`measure.ts`). */
export const fontFamily = `"Helvetica Neue", Helvetica, Arial, "Liberation Sans", Arimo, "Nimbus Sans", FreeSans, sans-serif`;

/** Custom properties of both palettes, to stand before rules that use `var(--bm-…)`. `scope` is the element that holds them. */
export function themeVariables(scope: string): string {
  const list = (palette: Palette): string =>
    Object.entries(palette)
      .map(([name, colour]) => `--bm-${name}:${colour}`)
      .join(";");
  return (
    `${scope}{${list(palettes.light)}}` +
    `@media screen and (prefers-color-scheme:dark){${scope}{${list(palettes.dark)}}}`
  );
}

/**
 * The style sheet inside a drawing. All selectors live under `.bm`, so that drawings do not touch the page around them.
 * @param used  classes that occur; rules for others are left out
 */
export function drawingStyle(theme: Theme, used?: ReadonlySet<string>): string {
  const colour = (name: keyof Palette): string => (theme === "auto" ? `var(--bm-${name})` : palettes[theme][name]);
  const occurs = (selector: string): boolean =>
    !used || [...selector.matchAll(/\.([\w-]+)/g)].every(([, name]) => used.has(name));
  const rules = drawingRules(colour)
    .filter(([selectors]) => selectors.some(occurs))
    .map(([selectors, body]) => `${selectors.map((s) => `.bm ${s}`).join(",")}{${body}}`)
    .join("");
  return (theme === "auto" ? themeVariables(".bm") : "") + rules;
}

/** Gradients and hatching that the body pictures refer to; only those of the classes that occur, where these are given. */
export function drawingDefinitions(used?: ReadonlySet<string>): Svg {
  const parts = Object.entries(definitions).flatMap(([name, svg]) => (!used || used.has(name) ? [svg] : []));
  return parts.length === 0 ? "" : `<defs>${parts.join("")}</defs>`;
}

/** By the class that refers to each. */
const definitions: Readonly<Record<string, Svg>> = {
  ageing: `<linearGradient id="bm-age"><stop class="young" offset="0"/><stop class="old" offset="1"/></linearGradient>`,
  hatched:
    `<pattern id="bm-hatch" width="6" height="6" patternUnits="userSpaceOnUse" patternTransform="rotate(45)">` +
    `<line class="hatch" x1="0" y1="0" x2="0" y2="6"/></pattern>`,
};

/** What the definitions use. */
const classesOfDefinitions: Readonly<Record<string, readonly string[]>> = {
  ageing: ["young", "old"],
  hatched: ["hatch"],
};

/** Classes that occur in a drawing, with those of the definitions that it refers to. */
export function classesIn(svg: Svg): ReadonlySet<string> {
  const own = [...svg.matchAll(/ class="([^"]*)"/g)].flatMap(([, names]) => names.split(" "));
  return new Set([...own, ...own.flatMap((name) => classesOfDefinitions[name] ?? [])]);
}

type Rule = readonly [selectors: readonly string[], body: string];

function drawingRules(colour: (name: keyof Palette) => string): readonly Rule[] {
  const wall = `stroke:${colour("wall")}`;
  return [
    [["text"], `font-family:${fontFamily};font-size:11px;fill:${colour("ink")};font-variant-numeric:tabular-nums`],
    [[".title"], "font-size:15px;font-weight:700"],
    [[".name"], "font-size:12px;font-weight:700"],
    [[".quiet"], `fill:${colour("quiet")}`],
    [[".look"], `fill:${colour("accent")}`],
    [[".fitted"], "text-decoration:underline"],
    [[".paper"], `fill:${colour("paper")}`],
    [[".liquid"], `fill:${colour("liquid")};${wall};stroke-width:1.25`],
    [[".ageing"], `fill:url(#bm-age);${wall};stroke-width:1.25`],
    [[".young"], `stop-color:${colour("young")}`],
    [[".old"], `stop-color:${colour("old")}`],
    [[".wall"], `${wall};stroke-width:1.25`],
    [[".thin"], "stroke-width:.6"],
    [[".band"], `fill:${colour("old")};fill-opacity:.35`],
    [[".front"], `fill:${colour("old")};fill-opacity:.55;${wall};stroke-width:1`],
    [[".plate"], `fill:${colour("paper")};fill-opacity:.85`],
    [[".return"], `fill:none;${wall};stroke-width:1.25`],
    [[".base .liquid", ".base .ageing"], `fill:${colour("paper")}`],
    [[".toned .liquid", ".toned .ageing"], `fill:${colour("wall")}`],
    [[".tone"], `fill:${colour("wall")}`],
    [[".rim"], `fill:none;${wall};stroke-width:1.25`],
    [[".ghost"], `fill:${colour("paper")};stroke:${colour("accent")};stroke-width:1.25;stroke-dasharray:3 2.5`],
    [[".still"], `fill:${colour("still")}`],
    [[".hatched"], `fill:url(#bm-hatch);stroke:${colour("hatch")};stroke-width:1;stroke-dasharray:4 2.5`],
    [[".hatch"], `stroke:${colour("hatch")};stroke-width:1.2`],
    [[".dot"], `fill:${colour("wall")}`],
    [[".frame"], `fill:none;stroke:${colour("faint")};stroke-width:1.25`],
    [[".frame.part"], `stroke:${colour("hatch")};stroke-width:.8;stroke-dasharray:2 3`],
    [[".leader"], `stroke:${colour("quiet")};stroke-width:.6`],
    [[".ribbon"], `fill:none;stroke:${colour("stream")}`],
    [[".ribbon.back"], `stroke:${colour("back")}`],
    [[".ribbon.accent"], `stroke:${colour("accent")}`],
    [[".ribbon.back.accent"], `stroke:${colour("accentSoft")}`],
    [[".ribbon.gone"], `stroke:${colour("accentSoft")};stroke-dasharray:7 4`],
    [[".ribbon.edge"], `stroke:${colour("ink")}`],
    [
      [".look-here .liquid", ".look-here .ageing", ".look-here .hatched", ".look-here .rim", ".look-here .ghost"],
      `stroke:${colour("accent")};stroke-width:3`,
    ],
    [[".halo"], `fill:none;stroke:${colour("paper")}`],
    [[".chevron"], `fill:none;${wall};stroke-width:1.25;stroke-linejoin:round;stroke-linecap:round`],
    [[".chevron.accent"], `stroke:${colour("accent")}`],
    [[".arc"], `fill:none;${wall};stroke-width:1.25`],
    [[".arc.accent"], `stroke:${colour("accent")}`],
    [[".terminal"], `fill:${colour("ink")}`],
    [[".manifold"], `stroke:${colour("wall")};stroke-width:2`],
    [[".drop"], `fill:${colour("ink")};stroke:${colour("paper")};stroke-width:1.5`],
    [[".ring"], `fill:${colour("paper")};stroke:${colour("ink")};stroke-width:2`],
    [[".scale"], `fill:none;stroke:${colour("quiet")};stroke-width:1`],
    [[".axis"], `stroke:${colour("quiet")};stroke-width:1;fill:none`],
    [[".grid"], `stroke:${colour("faint")};stroke-width:.6;stroke-opacity:.7`],
    [[".point"], `fill:none;stroke:${colour("quiet")};stroke-width:1`],
    [[".point.dense"], "stroke-width:1.4;stroke-linecap:round"],
    [[".point.out"], `stroke:${colour("hatch")};stroke-dasharray:1.5 1.5`],
    [[".dots"], `fill:${colour("wall")};stroke:none`],
    [[".residual"], `stroke:${colour("wall")};stroke-width:1.25`],
    [[".bar"], `fill:none;stroke:${colour("wall")};stroke-width:3`],
    [[".area"], `fill:${colour("old")};fill-opacity:.22`],
    [[".curve"], `fill:none;stroke:${colour("wall")};stroke-width:2;stroke-linejoin:round`],
    [[".curve.second"], `stroke:${colour("stream")};stroke-width:1.5;stroke-dasharray:7 3`],
    [[".curve.third"], `stroke:${colour("quiet")};stroke-width:1.5;stroke-dasharray:2 2.5`],
    [[".curve.rest"], `stroke:${colour("hatch")};stroke-width:1.1;stroke-dasharray:9 2.5 2 2.5`],
    [[".curve.thin"], "stroke-width:1.25"],
    [[".curve.accent"], `stroke:${colour("accent")}`],
    [[".spike"], `stroke:${colour("accent")};stroke-width:2`],
    [[".spike-tip"], `fill:${colour("accent")}`],
    [[".interval"], `stroke:${colour("wall")};stroke-width:7;stroke-opacity:.4`],
    [[".interval.narrow"], "stroke-width:4;stroke-opacity:.7"],
    [[".interval.look"], `stroke:${colour("accent")}`],
    [[".value"], `fill:${colour("wall")};stroke:${colour("paper")};stroke-width:1.5`],
    [[".value.look"], `fill:${colour("accent")}`],
    [[".between"], `stroke:${colour("quiet")};stroke-width:1.25`],
  ];
}
