import type { Edge } from "./order.js";
import { drawnRoles } from "./routes.js";
import { type Scale, streamWidth } from "./scale.js";
import type { FlowSheet, SheetStream, StreamRole } from "./sheet.js";

/** One stream on its way through the drawing. */
export interface Trip {
  readonly stream: SheetStream;
  readonly role: StreamRole;
  /** px */
  readonly width: number;
}

/** What is drawn how: streams between blocks, bodies that hang below another, bodies apart. */
export interface Itinerary {
  readonly trips: readonly Trip[];
  /** Names of blocks, in the order of the file. */
  readonly blocks: readonly string[];
  /** By host: exchanges with bodies that only exchange and hang below it. */
  readonly hanging: ReadonlyMap<string, readonly SheetStream[]>;
  /** What must stand to the right of what. */
  readonly edges: readonly Edge[];
}

/** Two thin lines with a gap: how an exchange between blocks is drawn, px. */
const exchangeWidth = 6;

export function itinerary(sheet: FlowSheet, scale: Scale): Itinerary {
  const roles = drawnRoles(sheet);
  const hanging = hangingBodies(sheet);
  const hung = new Set([...hanging].flatMap(([host, list]) => list.map((s) => partnerOf(s, host))));
  const dead = new Set(sheet.bodies.filter((b) => b.role === "dead").map((b) => b.name));
  const blocks = sheet.bodies.map((b) => b.name).filter((name) => !hung.has(name) && !dead.has(name));
  const known = new Set(blocks);
  const between = sheet.streams.filter((s) => known.has(s.from) && known.has(s.to));
  const trips = between.map((stream): Trip => {
    const role = roles.get(stream)!;
    return { stream, role, width: role === "exchange" ? exchangeWidth : streamWidth(stream.flow, scale) };
  });
  const edges: Edge[] = trips.filter((t) => t.role === "forward").map((t) => t.stream);
  // a body that only exchanges, but with several others, stands to the right of its first partner
  for (const name of blocks) {
    const own = between.filter((s) => s.from === name || s.to === name);
    if (own.length > 0 && own.every((s) => s.role === "exchange") && !edges.some((e) => e.to === name)) {
      const partner = partnerOf(own[0], name);
      if (!reaches(edges, name, partner)) edges.push({ from: partner, to: name });
    }
  }
  return { trips, blocks, hanging, edges };
}

/** Peels off bodies whose only tie is one exchange, from the outside in. */
function hangingBodies(sheet: FlowSheet): Map<string, SheetStream[]> {
  const hanging = new Map<string, SheetStream[]>();
  const ties = new Map<string, Set<SheetStream>>(sheet.bodies.map((b) => [b.name, new Set()]));
  for (const s of sheet.streams) {
    ties.get(s.from)?.add(s);
    ties.get(s.to)?.add(s);
  }
  const bodies = sheet.bodies.filter((b) => b.role === "body");
  for (let peeled = true; peeled; ) {
    peeled = false;
    for (const { name } of bodies) {
      const [only, more] = [...ties.get(name)!];
      if (!only || more || only.role !== "exchange" || only.from === only.to) continue;
      const host = partnerOf(only, name);
      if (!ties.has(host)) continue;
      hanging.set(host, [...(hanging.get(host) ?? []), only]);
      ties.get(host)!.delete(only);
      ties.get(name)!.clear();
      peeled = true;
    }
  }
  return hanging;
}

const partnerOf = (s: SheetStream, name: string): string => (s.from === name ? s.to : s.from);

function reaches(edges: readonly Edge[], from: string, to: string): boolean {
  const seen = new Set([from]);
  const open = [from];
  for (let here = open.pop(); here !== undefined; here = open.pop()) {
    if (here === to) return true;
    for (const e of edges) {
      if (e.from === here && !seen.has(e.to)) {
        seen.add(e.to);
        open.push(e.to);
      }
    }
  }
  return false;
}
