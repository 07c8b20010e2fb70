import type { Plant, PlantStream } from "../compile/plant.js";

/**
 * The streams of a plant as a drawing shows them: a port of a part by which one stream comes or one goes is passed over,
 * so that the stream runs from body to body.
 * @param kept ports that something is marked at: they stay
 */
export function pastPorts(
  { network, streams }: Plant,
  kept: ReadonlySet<string>,
): { readonly streams: readonly PlantStream[]; readonly passed: ReadonlySet<string> } {
  const ports = new Set(network.groups.flatMap((g) => [...g.inlets, ...g.outlets]).filter((name) => !kept.has(name)));
  const passed = new Set<string>();
  let shown = [...streams];
  for (const port of ports) {
    const before = shown.filter((s) => s.to === port);
    const after = shown.filter((s) => s.from === port);
    if ((before.length !== 1 && after.length !== 1) || before.length * after.length === 0) continue;
    passed.add(port);
    const joined = before.flatMap((a) => after.map((b) => join(a, b, before.length > 1)));
    shown = [...shown.filter((s) => s.to !== port && s.from !== port), ...joined];
  }
  return { streams: passed.size > 0 ? merged(shown) : streams, passed };
}

/** What the file says of it stands where it divides. */
const join = (a: PlantStream, b: PlantStream, many: boolean): PlantStream => ({
  from: a.from,
  to: b.to,
  leaves: a.leaves,
  enters: b.enters,
  flow: many ? a.flow : b.flow,
  role: a.role === "forward" ? b.role : a.role,
  written: many || b.written === "all" ? a.written : b.written,
});

/** Streams that come to run between the same two bodies, as one. */
function merged(streams: readonly PlantStream[]): PlantStream[] {
  const ways = new Map<string, PlantStream>();
  for (const s of streams) {
    const key = `${s.leaves}>${s.enters}>${s.role}`;
    const same = ways.get(key);
    ways.set(key, same ? { ...same, flow: same.flow + s.flow, written: "all" } : s);
  }
  return [...ways.values()];
}
