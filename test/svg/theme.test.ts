import { describe, expect, test } from "vitest";
import { drawingStyle, type Palette, palettes } from "../../src/svg/theme.js";

/** Relative luminance and contrast ratio, WCAG 2.1 (W3C Recommendation, 2018), from memory. */
const channel = (v: number): number => (v <= 0.04045 ? v / 12.92 : ((v + 0.055) / 1.055) ** 2.4);
const luminance = (hex: string): number => {
  const [r, g, b] = [1, 3, 5].map((k) => channel(Number.parseInt(hex.slice(k, k + 2), 16) / 255));
  return 0.2126 * r + 0.7152 * g + 0.0722 * b;
};
const contrast = (a: string, b: string): number => {
  const [low, high] = [luminance(a), luminance(b)].sort((x, y) => x - y);
  return (high + 0.05) / (low + 0.05);
};

/**
 * What the three common colour-blindnesses see of a colour.
 * Matrices on linear RGB: G. M. Machado et al., IEEE Trans. Vis. Comput. Graphics 15 (2009) 1291-1298, severity 1, from memory.
 */
const blindness = {
  protan: [0.152286, 1.052583, -0.204868, 0.114503, 0.786281, 0.099216, -0.003882, -0.048116, 1.051998],
  deutan: [0.367322, 0.860646, -0.227968, 0.280085, 0.672501, 0.047413, -0.01182, 0.04294, 0.968881],
  tritan: [1.255528, -0.076749, -0.178779, -0.078411, 0.930809, 0.147602, 0.004733, 0.691367, 0.3039],
} as const;
const seen = (hex: string, m: readonly number[]): number[] => {
  const rgb = [1, 3, 5].map((k) => channel(Number.parseInt(hex.slice(k, k + 2), 16) / 255));
  return [0, 3, 6].map((row) => m[row] * rgb[0] + m[row + 1] * rgb[1] + m[row + 2] * rgb[2]);
};

describe.each(["light", "dark"] as const)("%s palette", (theme) => {
  const p: Palette = palettes[theme];

  test.each(["ink", "quiet", "accent"] as const)("%s text is readable on paper", (name) => {
    expect(contrast(p[name], p.paper)).toBeGreaterThanOrEqual(4.5);
  });

  test("words inside a body are readable", () => {
    expect(contrast(p.ink, p.liquid)).toBeGreaterThanOrEqual(4.5);
  });

  test.each(["wall", "stream", "hatch"] as const)("%s lines stand out from paper", (name) => {
    expect(contrast(p[name], p.paper)).toBeGreaterThanOrEqual(3);
  });

  test("a grey print still tells streams, what runs back, bodies and both ends of a tube apart", () => {
    expect(contrast(p.stream, p.back)).toBeGreaterThan(1.8);
    expect(contrast(p.stream, p.liquid)).toBeGreaterThan(1.8);
    expect(contrast(p.young, p.old)).toBeGreaterThan(1.8);
    expect(contrast(p.still, p.liquid)).toBeGreaterThan(1.3);
  });

  test.each(Object.entries(blindness))("accent differs from the streams for %s eyes", (_, matrix) => {
    const [a, s] = [seen(p.accent, matrix), seen(p.stream, matrix)];
    expect(Math.hypot(...a.map((v, k) => v - s[k]))).toBeGreaterThan(0.1);
  });
});

describe("style sheet", () => {
  test("auto follows the screen and prints light", () => {
    expect(drawingStyle("auto")).toContain("@media screen and (prefers-color-scheme:dark)");
  });

  test("a fixed theme has no variables, for renderers that know none", () => {
    expect(drawingStyle("light")).not.toMatch(/var\(|--bm|@media/);
  });
});
