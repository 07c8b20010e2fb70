import { expect } from "vitest";
import { compile } from "../../src/compile/compile.js";
import type { Plant } from "../../src/compile/plant.js";
import type { Duty } from "../../src/model/duty.js";
import { parseDuty } from "../../src/parse/duty.js";
import { parseNetwork } from "../../src/parse/network.js";

/** A plant and a duty from their texts; the duty names its chemistry `c.yaml`. */
export function read(network: string, duty: string, chemistry: string): { plant: Plant; duty: Duty } {
  const files = { read: (path: string) => (path === "c.yaml" ? chemistry : undefined) };
  const d = parseDuty(duty, { path: "d.yaml", ...files });
  const n = parseNetwork(network, { path: "n.yaml", ...files });
  expect([...d.problems, ...n.problems].filter((p) => p.severity === "error").map((p) => p.message)).toEqual([]);
  const { plant } = compile(n.document as NonNullable<typeof n.document>);
  return { plant: plant as Plant, duty: d.document as Duty };
}

/** A network of one body that a feed enters and a product leaves. */
export const one = (body: string, flow = "10 L/min"): string =>
  `network: one body\nformat: 1\nfeeds: {feed: {flow: ${flow}, to: body}}\ncompartments:\n  body: ${body}\noutlets: [product]\n`;

/** J/(mol K), CODATA 2018. */
export const gasConstant = 8.314462618;

/** A root of a function that changes sign between two points, by halving. */
export function bracketed(f: (x: number) => number, low: number, high: number): number {
  let [a, b] = [low, high];
  for (let i = 0; i < 200; i++) {
    const m = (a + b) / 2;
    if (f(m) * f(a) > 0) a = m;
    else b = m;
  }
  return (a + b) / 2;
}

/** All roots between two points that a grid of n intervals separates. */
export function rootsOf(f: (x: number) => number, low: number, high: number, n: number): number[] {
  const at = (k: number): number => low + ((high - low) * k) / n;
  return Array.from({ length: n }, (_, k) => k).flatMap((k) =>
    f(at(k)) * f(at(k + 1)) < 0 ? [bracketed(f, at(k), at(k + 1))] : [],
  );
}
