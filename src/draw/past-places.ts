import type { Plant, PlantStream } from "../compile/plant.js";

/** A stream as it is drawn. */
export interface ShownStream extends PlantStream {
  /** Places that it passes through without a mark there, in order. */
  readonly past?: readonly string[];
  /** Those of them that the file names as junctions, rather than ports of parts. */
  readonly through?: readonly string[];
}

/**
 * The streams of a plant as a drawing shows them. A port of a part by which one stream comes or one goes is passed over,
 * so that the stream runs from body to body; so is a junction where one comes and one goes.
 * @param kept places that something is marked at: they stay
 */
export function pastPlaces(
  { network, streams }: Plant,
  kept: ReadonlySet<string>,
): { readonly streams: readonly ShownStream[]; readonly passed: ReadonlySet<string> } {
  const ports = new Set(network.groups.flatMap((g) => [...g.inlets, ...g.outlets]));
  const junctions = network.compartments.filter(
    (c) => c.kind.flows && c.kind.keys.volume === undefined && !c.kind.zoned,
  );
  const passed = new Set<string>();
  let shown: ShownStream[] = [...streams];
  for (const place of new Set([...ports, ...junctions.map((c) => c.name)])) {
    if (kept.has(place)) continue;
    const before = shown.filter((s) => s.to === place);
    const after = shown.filter((s) => s.from === place);
    if ((before.length !== 1 && after.length !== 1) || before.length * after.length === 0) continue;
    const port = ports.has(place);
    if (!port && (before.length !== 1 || after.length !== 1 || before[0] === after[0])) continue;
    passed.add(place);
    const joined = before.flatMap((a) => after.map((b) => join(a, b, before.length > 1, place, port)));
    shown = [...shown.filter((s) => s.to !== place && s.from !== place), ...joined];
  }
  return { streams: passed.size > 0 ? merged(shown) : streams, passed };
}

/** What the file says of it stands where it divides. */
function join(a: ShownStream, b: ShownStream, many: boolean, place: string, port: boolean): ShownStream {
  const says = many || b.written === "all" ? a : b;
  const through = [...(a.through ?? []), ...(port ? [] : [place]), ...(b.through ?? [])];
  return {
    from: a.from,
    to: b.to,
    leaves: a.leaves,
    enters: b.enters,
    flow: many ? a.flow : b.flow,
    role: a.role === "forward" ? b.role : a.role,
    written: says.written,
    ...(says.share === undefined ? {} : { share: says.share }),
    past: [...(a.past ?? []), place, ...(b.past ?? [])],
    ...(through.length > 0 ? { through } : {}),
  };
}

/** Streams that come to run between the same two bodies by parts, as one. */
function merged(streams: readonly ShownStream[]): ShownStream[] {
  const ways = new Map<string, ShownStream>();
  for (const s of streams) {
    const key = `${s.leaves}>${s.enters}>${s.role}>${s.through ?? ""}`;
    const same = ways.get(key);
    if (!same) ways.set(key, s);
    else {
      const { share, ...rest } = same;
      ways.set(key, { ...rest, flow: same.flow + s.flow, written: "all" });
    }
  }
  return [...ways.values()];
}
