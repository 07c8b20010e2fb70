import type { Network } from "../model/network.js";
import { severalBody } from "../svg/bodies.js";
import { amount } from "./scale.js";
import type { FlowSheet, SheetBody, SheetStream } from "./sheet.js";

/** More bodies than this make a drawing that nobody can read, and that takes seconds. */
export const mostBodies = 60;

/** Bodies that a sheet describes together, by name: the parts of a network. */
export interface SheetGroup {
  readonly name: string;
  readonly members: readonly string[];
}

/**
 * A sheet that still tells the flow, with fewer bodies: first the parts of the network are drawn as one body each, then rows in
 * series, then bodies that feed one another in a circle, then neighbours along the flow. Volumes and flows between them are
 * sums; what circulates inside is not drawn. A sheet of few bodies stays as it is.
 */
export function aggregated(sheet: FlowSheet, parts: readonly SheetGroup[], most = mostBodies): FlowSheet {
  if (countOf(sheet) <= most) return sheet;
  const steps: ((s: FlowSheet) => readonly SheetGroup[])[] = [() => parts, rows, circles, (s) => stretches(s, most)];
  let here = sheet;
  for (const step of steps) {
    here = collapsed(here, step(here));
    if (countOf(here) <= most) break;
  }
  return {
    ...here,
    says: [sheet.says, `${countOf(sheet)} bodies drawn as ${countOf(here)}`].filter(Boolean).join("; "),
  };
}

/** The parts of a network that lie in no other part. */
export const outermost = ({ groups }: Pick<Network, "groups">): readonly SheetGroup[] =>
  groups.filter((g) => !groups.some((o) => o !== g && g.name.startsWith(`${o.name}.`)));

const countOf = (sheet: FlowSheet): number =>
  sheet.bodies.filter((b) => b.role !== "feed" && b.role !== "outlet").length;

/** Each group of two or more as one body. */
function collapsed(sheet: FlowSheet, groups: readonly SheetGroup[]): FlowSheet {
  const known = new Map(sheet.bodies.map((b) => [b.name, b]));
  const home = new Map<string, string>();
  const made = new Map<string, SheetBody[]>();
  for (const { name, members } of groups) {
    const own = members.flatMap((m) => (home.has(m) ? [] : (known.get(m) ?? [])));
    if (own.length < 2) continue;
    made.set(name, own);
    for (const b of own) home.set(b.name, name);
  }
  if (made.size === 0) return sheet;
  const at = (name: string): string => home.get(name) ?? name;
  const streams = new Map<string, SheetStream>();
  for (const s of sheet.streams) {
    const [from, to] = [at(s.from), at(s.to)];
    if (from === to && home.has(s.from)) continue;
    const kind = s.role === "exchange" ? "exchange" : "flow";
    const [a, b] = kind === "exchange" && from > to ? [to, from] : [from, to];
    const before = streams.get(`${kind} ${a} ${b}`);
    const flow = s.flow + (before?.flow ?? 0);
    const untouched = !before && from === s.from && to === s.to;
    const joined = { from: a, to: b, flow, role: before?.role ?? s.role, label: amount(flow, sheet.units.flow) };
    const accent = s.accent || before?.accent ? { accent: true } : {};
    streams.set(`${kind} ${a} ${b}`, untouched ? s : { ...joined, ...accent });
  }
  const bodies = sheet.bodies.flatMap((b): SheetBody[] => {
    const name = home.get(b.name);
    if (name === undefined) return [b];
    const members = made.get(name) ?? [];
    return members[0] === b ? [oneOf(name, members)] : [];
  });
  return { ...sheet, bodies, streams: [...streams.values()] };
}

function oneOf(name: string, members: readonly SheetBody[]): SheetBody {
  const count = members.reduce((sum, b) => sum + (b.stands ?? (b.volume > 0 ? 1 : 0)), 0);
  const volume = members.reduce((sum, b) => sum + b.volume, 0);
  const tone = members.reduce((sum, b) => sum + (b.tone ?? 0) * b.volume, 0) / volume;
  const marks = [...new Set(members.flatMap((b) => b.marks ?? []))];
  return {
    name,
    volume,
    role: volume > 0 ? "body" : "junction",
    picture: (box) => severalBody(box, count),
    aspect: 1.5,
    stands: count,
    note: `${count} bodies`,
    ...(marks.length > 0 ? { marks } : {}),
    ...(members.some((b) => b.tone !== undefined) ? { tone } : {}),
    ...(members.some((b) => b.accent) ? { accent: true } : {}),
  };
}

/** Strongly connected bodies (Tarjan, SIAM J. Comput. 1 (1972) 146): what leaves one may come back to it. */
function circles(sheet: FlowSheet): readonly SheetGroup[] {
  const out = new Map<string, string[]>();
  const link = (a: string, b: string): void => void out.set(a, [...(out.get(a) ?? []), b]);
  for (const s of sheet.streams) {
    link(s.from, s.to);
    if (s.role === "exchange") link(s.to, s.from);
  }
  const index = new Map<string, number>();
  const low = new Map<string, number>();
  const stack: string[] = [];
  const open = new Set<string>();
  const groups: string[][] = [];
  for (const { name: root } of sheet.bodies) {
    if (index.has(root)) continue;
    const path = [{ name: root, next: 0 }];
    while (path.length > 0) {
      const top = path[path.length - 1];
      const { name } = top;
      if (top.next === 0) {
        index.set(name, index.size);
        low.set(name, index.get(name)!);
        stack.push(name);
        open.add(name);
      }
      const next = out.get(name)?.[top.next++];
      if (next !== undefined) {
        if (!index.has(next)) path.push({ name: next, next: 0 });
        else if (open.has(next)) low.set(name, Math.min(low.get(name)!, index.get(next)!));
        continue;
      }
      path.pop();
      const above = path[path.length - 1];
      if (above) low.set(above.name, Math.min(low.get(above.name)!, low.get(name)!));
      if (low.get(name) !== index.get(name)) continue;
      const members = stack.splice(stack.indexOf(name));
      for (const m of members) open.delete(m);
      groups.push(members);
    }
  }
  // A circle that is nearly all would leave nothing to see of the flow.
  const most = countOf(sheet) / 2;
  return groups
    .filter((g) => g.length > 1 && g.length <= most)
    .map((members) => ({ name: `around ${largestOf(sheet, members)}`, members }));
}

/** Bodies one behind the other, with nothing between that joins or leaves. */
function rows(sheet: FlowSheet): readonly SheetGroup[] {
  const inner = new Set(sheet.bodies.filter((b) => b.role === "body" || b.role === "junction").map((b) => b.name));
  const only = (side: "from" | "to", name: string): SheetStream | undefined => {
    const own = sheet.streams.filter((s) => s[side] === name);
    return own.length === 1 && own[0].role !== "exchange" ? own[0] : undefined;
  };
  const exchanging = new Set(sheet.streams.flatMap((s) => (s.role === "exchange" ? [s.from, s.to] : [])));
  const next = new Map<string, string>();
  for (const name of inner) {
    const leaves = only("from", name);
    if (!leaves || !inner.has(leaves.to) || leaves.to === name || exchanging.has(name) || exchanging.has(leaves.to))
      continue;
    if (only("to", leaves.to)) next.set(name, leaves.to);
  }
  const followers = new Set(next.values());
  const groups: SheetGroup[] = [];
  for (const name of next.keys()) {
    if (followers.has(name)) continue;
    const members = [name];
    for (let at = next.get(name); at !== undefined && !members.includes(at); at = next.get(at)) members.push(at);
    groups.push({ name: `${members[0]} to ${members[members.length - 1]}`, members });
  }
  return groups;
}

/** Neighbours along the flow, so many together that the drawing can be read: by their distance from the feeds. */
function stretches(sheet: FlowSheet, most: number): readonly SheetGroup[] {
  const out = new Map<string, string[]>();
  for (const s of sheet.streams) {
    out.set(s.from, [...(out.get(s.from) ?? []), s.to]);
    if (s.role === "exchange") out.set(s.to, [...(out.get(s.to) ?? []), s.from]);
  }
  const ordered: string[] = [];
  const seen = new Set<string>();
  const feeds = sheet.bodies.filter((b) => b.role === "feed").map((b) => b.name);
  for (const root of [...feeds, ...sheet.bodies.map((b) => b.name)]) {
    const line = seen.has(root) ? [] : [root];
    seen.add(root);
    for (let k = 0; k < line.length; k++) {
      ordered.push(line[k]);
      for (const to of out.get(line[k]) ?? []) {
        if (seen.has(to)) continue;
        seen.add(to);
        line.push(to);
      }
    }
  }
  const inner = new Set(sheet.bodies.filter((b) => b.role === "body" || b.role === "junction").map((b) => b.name));
  const list = ordered.filter((name) => inner.has(name));
  const fixed = countOf(sheet) - list.length;
  const size = Math.ceil(list.length / Math.max(1, Math.min(most - fixed, 24)));
  return Array.from({ length: Math.ceil(list.length / size) }, (_, k) => {
    const members = list.slice(k * size, (k + 1) * size);
    return { name: `${members[0]} and on`, members };
  });
}

const largestOf = (sheet: FlowSheet, members: readonly string[]): string =>
  sheet.bodies.filter((b) => members.includes(b.name)).reduce((most, b) => (b.volume > most.volume ? b : most)).name;
