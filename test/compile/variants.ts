import type { Plant } from "../../src/compile/plant.js";

/** Every literal value of a network's text spelled as a parameter: `p0`, `p1`, …. Bounds are left out. */
export function parametric(text: string): string {
  const parameters: string[] = [];
  const body = text.replace(/\b\d+(?:\.\d+)? (?:L\/min|L|%)/g, (value) => {
    parameters.push(`  p${parameters.length}: {value: ${value}}`);
    return `p${parameters.length - 1}`;
  });
  return body.replace("feeds:", `parameters:\n${parameters.join("\n")}\nfeeds:`);
}

/** The same vessel in other units: m3, m3/h and fractions in place of L, L/min and %. */
export const inOtherUnits = (text: string): string =>
  text.replace(/\b(\d+(?:\.\d+)?) (L\/min|L|%)/g, (_, number: string, unit: string) => {
    if (unit === "L") return `${Number(number) / 1000} m3`;
    return unit === "L/min" ? `${Number(number) * 0.06} m3/h` : `${Number(number) / 100}`;
  });

/** Places under other names, whose alphabetical order is another one, too. */
export const renamed = (text: string): string =>
  text
    .replace(/\b([ns])(\d)\b/g, (_, kind: string, digit: string) => `z${9 - Number(digit)}-${kind}`)
    .replace(/\bout\b/g, "a-out")
    .replace(/\bfeed\b/g, "zz-feed");
export const oldName = (name: string): string =>
  name
    .replace(/^z(\d)-([ns])$/, (_, digit: string, kind: string) => `${kind}${9 - Number(digit)}`)
    .replace(/^a-out$/, "out")
    .replace(/^zz-feed$/, "feed");

/** The lines of `compartments:` in another order. */
export function reordered(text: string, order: (lines: string[]) => string[]): string {
  const [head, tail] = text.split("compartments:\n");
  const end = tail.indexOf("outlets:");
  const lines = tail.slice(0, end).trimEnd().split("\n");
  return `${head}compartments:\n${order(lines).join("\n")}\n${tail.slice(end)}`;
}

/** What a plant is apart from names and order: flow of each stream and volume of each place, by old names, sorted. */
export function essence(plant: Plant, name: (name: string) => string = (n) => n): Map<string, number> {
  const all = [
    ...plant.streams.map((s): [string, number] => {
      const ends = [name(s.from), name(s.to)];
      return [s.role === "exchange" ? ends.sort().join(" <> ") : ends.join(" -> "), s.flow];
    }),
    ...plant.nodes.map((n): [string, number] => [`volume of ${name(n.name)}`, n.volume]),
    ...plant.nodes.map((n): [string, number] => [`inflow of ${name(n.name)}`, n.inflow]),
  ];
  return new Map(all.sort(([a], [b]) => (a < b ? -1 : 1)));
}

/** The largest difference of two, relative to the larger value; infinite where one has what the other lacks. */
export function apart(a: ReadonlyMap<string, number>, b: ReadonlyMap<string, number>): number {
  if ([...a.keys()].join("\n") !== [...b.keys()].join("\n")) return Number.POSITIVE_INFINITY;
  return Math.max(...[...a].map(([key, x]) => difference(x, b.get(key) as number)));
}

const difference = (x: number, y: number): number =>
  x === y ? 0 : Math.abs(x - y) / Math.max(Math.abs(x), Math.abs(y));
