import type { FlowSheet, SheetStream, StreamRole } from "./sheet.js";

/** Anything that goes from one named place to another. */
export interface Link {
  readonly from: string;
  readonly to: string;
  readonly role: StreamRole;
}

/**
 * Which streams run back: the back edges of a depth-first search from `roots`, then from whatever they do not reach.
 * Without them the rest has no circle. Streams that are called a recycle already, and exchange, are not followed.
 */
export function backStreams<L extends Link>(
  names: readonly string[],
  links: readonly L[],
  roots: readonly string[],
): Set<L> {
  const out = outgoing(links.filter((link) => link.role === "forward" || link.role === "bypass"));
  const back = new Set(links.filter((link) => link.role === "recycle"));
  const state = new Map<string, "open" | "done">();
  for (const root of [...roots, ...names]) {
    if (state.has(root)) continue;
    const path = [{ name: root, next: 0 }];
    state.set(root, "open");
    while (path.length > 0) {
      const top = path[path.length - 1];
      const link = out.get(top.name)?.[top.next++];
      if (!link) {
        state.set(top.name, "done");
        path.pop();
      } else if (state.get(link.to) === "open") back.add(link);
      else if (!state.has(link.to)) {
        state.set(link.to, "open");
        path.push({ name: link.to, next: 0 });
      }
    }
  }
  return back;
}

/**
 * Is the stream a bypass: does another way of forward streams lead from its start to its end through a body?
 * `forward` must be free of circles; `isBody` tells volumes from feeds, outlets and junctions.
 */
export function skipsBodies(link: Link, forward: readonly Link[], isBody: (name: string) => boolean): boolean {
  const out = outgoing(forward.filter((other) => other !== link));
  const seen = new Set<string>();
  const open: { name: string; throughBody: boolean }[] = [{ name: link.from, throughBody: false }];
  for (let here = open.pop(); here; here = open.pop()) {
    for (const { to } of out.get(here.name) ?? []) {
      if (to === link.to) {
        if (here.throughBody) return true;
        continue;
      }
      const throughBody = here.throughBody || isBody(to);
      const key = `${throughBody} ${to}`;
      if (!seen.has(key)) open.push({ name: to, throughBody });
      seen.add(key);
    }
  }
  return false;
}

/** How each stream of a sheet is drawn. Whatever the sheet says, what comes out as forward has no circle. */
export function drawnRoles(sheet: FlowSheet): Map<SheetStream, StreamRole> {
  const names = sheet.bodies.map((b) => b.name);
  const feeds = sheet.bodies.filter((b) => b.role === "feed").map((b) => b.name);
  const back = backStreams(names, sheet.streams, feeds);
  const bodies = new Set(sheet.bodies.filter((b) => b.role === "body").map((b) => b.name));
  const onward = sheet.streams.filter((s) => s.role !== "exchange" && !back.has(s));
  return new Map(
    sheet.streams.map((s): [SheetStream, StreamRole] => {
      if (s.role === "exchange") return [s, "exchange"];
      if (back.has(s)) return [s, "recycle"];
      return [s, skipsBodies(s, onward, (name) => bodies.has(name)) ? "bypass" : "forward"];
    }),
  );
}

function outgoing<L extends Link>(links: readonly L[]): Map<string, L[]> {
  const out = new Map<string, L[]>();
  for (const link of links) out.set(link.from, [...(out.get(link.from) ?? []), link]);
  return out;
}
