import { kinds } from "../compartments/index.js";
import type { Compartment, Feed, Group, Network, Outlet, Stream } from "../model/network.js";
import { textOf } from "../read/tree.js";
import type { LocalFeed, LocalNetwork } from "./local.js";
import type { Instance, Part } from "./part.js";

type Placed = Pick<Network, "feeds" | "compartments" | "outlets" | "groups">;

/**
 * A document and its parts as one network: bodies of a part stand among those of the document, under dotted names; its
 * feeds and outlets are junctions, its ports.
 */
export function placeAll(root: Instance, locals: ReadonlyMap<Instance, LocalNetwork>): Placed {
  const local = locals.get(root) as LocalNetwork;
  const compartments: Compartment[] = [];
  const groups: Group[] = [];
  placeBodies(local, "", locals, compartments, groups);
  const feeds = local.feeds.flatMap(({ named, ...f }): Feed[] =>
    named ? [{ ...f, flow: named.value, flowSlot: named.slot }] : [],
  );
  return { feeds, compartments, outlets: local.outlets, groups };
}

function placeBodies(
  { bodies }: LocalNetwork,
  prefix: string,
  locals: ReadonlyMap<Instance, LocalNetwork>,
  compartments: Compartment[],
  groups: Group[],
): void {
  for (const body of bodies) {
    if (!("part" in body)) {
      compartments.push(under(prefix, body));
      continue;
    }
    const { part, ways } = body;
    const leads = (outlet: string): Stream[] => (ways.get(outlet) ?? []).map((s) => ({ ...s, to: prefix + s.to }));
    const place = (name: string, next: ((outlet: string) => Stream[]) | undefined, repeat = 0): Group => {
      const first = compartments.length;
      const at = groups.length;
      const instance = part.instances[repeat] ?? part.instances[0];
      placePart(instance, `${name}.`, next ?? leads, locals, compartments, groups);
      const group = groupOf(part, name, compartments.slice(first));
      groups.splice(at, 0, group);
      return group;
    };
    const name = prefix + part.name;
    if (part.repeat === 1) place(name, undefined);
    else {
      const at = groups.length;
      const all = Array.from({ length: part.repeat }, (_, i) =>
        place(
          `${name}.${i + 1}`,
          i + 1 < part.repeat ? () => [onward(`${name}.${i + 2}.${part.inlets[0]}`, part)] : undefined,
          i,
        ),
      );
      const { inlets } = all[0];
      const { outlets } = all[all.length - 1];
      groups.splice(at, 0, { ...all[0], name, inlets, outlets, members: all.flatMap((g) => g.members) });
    }
  }
}

function placePart(
  instance: Instance,
  prefix: string,
  leads: (outlet: string) => readonly Stream[],
  locals: ReadonlyMap<Instance, LocalNetwork>,
  compartments: Compartment[],
  groups: Group[],
): void {
  const local = locals.get(instance) as LocalNetwork;
  for (const f of local.feeds) compartments.push(under(prefix, port(f, f.streams)));
  placeBodies(local, prefix, locals, compartments, groups);
  for (const o of local.outlets) compartments.push({ ...port(o, leads(o.name)), name: prefix + o.name });
}

/** A body under its name from outside; so are all places that it speaks of. */
const under = (prefix: string, body: Compartment): Compartment =>
  prefix === ""
    ? body
    : {
        ...body,
        name: prefix + body.name,
        streams: body.streams.map((s) => ({ ...s, to: prefix + s.to })),
        exchanges: body.exchanges.map((e) => ({ ...e, partner: prefix + e.partner })),
      };

/** The junction that a feed or outlet is inside another network. */
const port = (of: Outlet & Partial<LocalFeed>, streams: readonly Stream[]): Compartment => ({
  name: of.name,
  at: of.at,
  kind: kinds.junction,
  values: {},
  counts: {},
  words: {},
  streams,
  exchanges: [],
  toAt: of.toAt ?? of.at,
});

const onward = (to: string, part: Part): Stream => ({ to, at: part.at, split: { is: "all" } });

const groupOf = (part: Part, name: string, members: readonly Compartment[]): Group => ({
  name,
  at: part.at,
  title: textOf(part.instances[0].tree, "network") ?? "",
  path: part.instances[0].tree.at.source.path,
  members: members.map((c) => c.name),
  inlets: part.inlets.map((inlet) => `${name}.${inlet}`),
  outlets: part.outlets.map((outlet) => `${name}.${outlet}`),
});
