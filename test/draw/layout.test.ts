import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { overlaps } from "../../src/draw/clutter.js";
import { type Layout, layOut } from "../../src/draw/layout.js";
import type { FlowSheet, SheetBody, SheetStream } from "../../src/draw/sheet.js";
import { samples } from "../../src/svg/spine.js";
import type { Box } from "../../src/svg/svg.js";
import { dead, exchange, feed, junction, outlet, sheets, stirred, stream, tubular, units } from "./sheets.js";

/** What a drawing promises, in words; empty where it keeps all. */
function faults(layout: Layout): string[] {
  const found: string[] = [];
  const bodies = layout.bodies.map((p) => ({ is: p.body.name, box: p.box }));
  const words = [
    ...layout.captions.map((c) => ({ is: `caption ${c.lines[0].words}`, box: c.box })),
    ...layout.labels.map((l) => ({ is: `label ${l.caption.lines[0].words}`, box: l.caption.box })),
  ];
  const all = [...bodies, ...words];
  all.forEach((a, k) => {
    for (const b of all.slice(k + 1)) if (overlaps(shrunk(a.box), shrunk(b.box))) found.push(`${a.is} on ${b.is}`);
    if (!within(a.box, layout.bounds)) found.push(`${a.is} outside`);
  });
  for (const r of layout.ribbons) {
    const half = r.trip.width / 2;
    const spots = samples(r.spine, 4);
    for (const w of words) {
      const hit = spots.some((p) =>
        overlaps(shrunk(w.box), { x: p.x - half, y: p.y - half, width: 2 * half, height: 2 * half }),
      );
      if (hit) found.push(`${r.from}>${r.to} runs through ${w.is}`);
    }
    const strange = bodies.filter((b) => b.is !== r.from && b.is !== r.to);
    for (const b of strange) {
      if (spots.some((p) => overlaps(shrunk(b.box), { x: p.x, y: p.y, width: 0.1, height: 0.1 }))) {
        found.push(`${r.from}>${r.to} runs through ${b.is}`);
      }
    }
  }
  for (const { leader, caption: own } of layout.labels) {
    if (!leader) continue;
    for (const w of words) {
      const through = Array.from({ length: 60 }, (_, k) => (k + 0.5) / 60).some((t) => {
        const x = leader.from.x + t * (leader.to.x - leader.from.x);
        const y = leader.from.y + t * (leader.to.y - leader.from.y);
        return overlaps(shrunk(w.box), { x, y, width: 0.1, height: 0.1 });
      });
      if (through && w.box !== own.box) found.push(`the leader of ${own.lines[0].words} runs through ${w.is}`);
    }
  }
  return found;
}

const shrunk = (b: Box): Box => ({
  x: b.x + 0.5,
  y: b.y + 0.5,
  width: Math.max(0, b.width - 1),
  height: Math.max(0, b.height - 1),
});

const within = (a: Box, b: Box): boolean =>
  a.x >= b.x - 0.01 &&
  a.y >= b.y - 0.01 &&
  a.x + a.width <= b.x + b.width + 0.01 &&
  a.y + a.height <= b.y + b.height + 0.01;

describe("nothing covers anything", () => {
  test.each(Object.keys(sheets))("%s", (name) => {
    expect(faults(layOut(sheets[name]))).toEqual([]);
  });

  test("in random networks", () => {
    fc.assert(
      fc.property(randomSheet, (sheet) => {
        expect(faults(layOut(sheet))).toEqual([]);
      }),
      { numRuns: 100 },
    );
  });
});

describe("what the picture says is true", () => {
  test("areas are in proportion to volumes, widths to flows", () => {
    const layout = layOut(sheets.v3);
    for (const { body, box } of layout.bodies) {
      if (body.role === "body") expect(box.width * box.height).toBeCloseTo(body.volume * layout.scale.area, 6);
    }
    for (const r of layout.ribbons) expect(r.trip.width).toBeCloseTo(r.trip.stream.flow * layout.scale.width, 6);
  });

  test("feeds stand left of all bodies and outlets right", () => {
    for (const sheet of Object.values(sheets)) {
      const { bodies } = layOut(sheet);
      const at = (role: string): number[] => bodies.filter((p) => p.body.role === role).map((p) => p.box.x);
      expect(Math.max(...at("feed"))).toBeLessThan(Math.min(...at("body")));
      expect(Math.min(...at("outlet"))).toBeGreaterThan(Math.max(...at("body")));
    }
  });

  test("what runs back lies below the bodies it passes, a bypass above, dead water apart", () => {
    const { ribbons, bodies } = layOut(sheets.loop);
    const back = ribbons.find((r) => r.trip.role === "recycle")!;
    const lowest = Math.max(...samples(back.spine).map((p) => p.y));
    const drum = bodies.find((p) => p.body.name === "drum")!.box;
    expect(lowest).toBeGreaterThan(drum.y + drum.height);
    const sludge = bodies.find((p) => p.body.name === "sludge")!.box;
    expect(sludge.y).toBeGreaterThan(lowest);
    const v3 = layOut(sheets.v3);
    const bypass = v3.ribbons.find((r) => r.trip.role === "bypass")!;
    const bulk = v3.bodies.find((p) => p.body.name === "bulk")!.box;
    expect(Math.min(...samples(bypass.spine).map((p) => p.y))).toBeLessThan(bulk.y);
  });

  test("the main line runs straight", () => {
    const { ribbons } = layOut(sheets.v3);
    for (const r of ribbons.filter((s) => s.trip.role === "forward")) {
      for (const p of samples(r.spine)) expect(p.y).toBeCloseTo(r.spine.start.y, 6);
    }
  });
});

/** Feeds into a random tangle of bodies with outlets: flows are free numbers, a drawing need not balance. */
const randomSheet: fc.Arbitrary<FlowSheet> = fc
  .record({
    kinds: fc.array(fc.constantFrom("stirred", "row", "tubular", "junction", "dead", "lonely"), {
      minLength: 1,
      maxLength: 9,
    }),
    volumes: fc.array(fc.double({ min: 0.5, max: 2000, noNaN: true }), { minLength: 9, maxLength: 9 }),
    feeds: fc.integer({ min: 0, max: 2 }),
    outlets: fc.integer({ min: 0, max: 3 }),
    links: fc.array(fc.tuple(fc.nat(), fc.nat(), fc.double({ min: 0.01, max: 50, noNaN: true })), { maxLength: 14 }),
    exchanges: fc.array(fc.tuple(fc.nat(), fc.nat()), { maxLength: 3 }),
  })
  .map(({ kinds, volumes, feeds, outlets, links, exchanges }): FlowSheet => {
    const inner = kinds.map((kind, k): SheetBody => {
      const name = `${kind}-${k}`;
      if (kind === "stirred" || kind === "lonely") return stirred(name, volumes[k]);
      if (kind === "row") return stirred(name, volumes[k], 3);
      if (kind === "tubular") return tubular(name, volumes[k]);
      return kind === "junction" ? junction(name) : dead(name, volumes[k]);
    });
    const into = Array.from({ length: feeds }, (_, k) => feed(`feed-${k}`));
    const out = Array.from({ length: outlets }, (_, k) => outlet(`outlet-${k}`));
    const flowing = inner.filter((b) => b.role !== "dead" && !b.name.startsWith("lonely"));
    const volumesOnly = inner.filter((b) => b.role === "body");
    const pick = <T>(list: readonly T[], n: number): T | undefined => list[n % Math.max(1, list.length)];
    const streams: SheetStream[] = [];
    const once = new Set<string>();
    const join = (
      from: SheetBody | undefined,
      to: SheetBody | undefined,
      make: (a: string, b: string) => SheetStream,
    ): void => {
      if (!from || !to || once.has(`${from.name}>${to.name}`)) return;
      once.add(`${from.name}>${to.name}`);
      streams.push(make(from.name, to.name));
    };
    into.forEach((f, k) => {
      join(f, pick(flowing, k), (a, b) => stream(a, b, 7));
    });
    for (const [from, to, flow] of links) {
      const source = pick([...into, ...flowing], from);
      join(source, pick([...flowing, ...out], to), (a, b) => stream(a, b, flow, `${flow.toFixed(1)} L/min (20 %)`));
    }
    out.forEach((o, k) => {
      join(pick(flowing, k + 1), o, (a, b) => stream(a, b, 3));
    });
    for (const [a, b] of exchanges) {
      const [one, other] = [pick(volumesOnly, a), pick(volumesOnly, b)];
      if (one !== other) join(one, other, (x, y) => exchange(x, y, 0.5));
    }
    return { title: "Random", bodies: [...into, ...inner, ...out], streams, units };
  });
