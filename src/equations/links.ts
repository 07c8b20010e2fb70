import type { Plant } from "../compile/plant.js";
import type { Exchange, Stream } from "../model/network.js";
import { placeOf, type Span } from "../text/source.js";
import { streamFlow } from "./tex.js";

/** A place in a file: its path, and the line from 1. */
export interface Where {
  readonly file: string;
  readonly line: number;
}

export const whereOf = (at: Span): Where => ({ file: at.source.path, line: placeOf({ ...at, to: at.from }).line });

/** A flow between two primitive nodes, and where the file says so. */
export interface Link extends Where {
  readonly from: number;
  readonly to: number;
  /** m3/s. */
  readonly flow: number;
  /** Its symbol, in math. */
  readonly symbol: string;
  /** In words: "stream feed to bulk". */
  readonly says: string;
}

/** A stream or an exchange as the file has it, with its solved flow. */
export interface WrittenStream extends Where {
  readonly from: string;
  readonly to: string;
  /** The same to the point: `chain.3`, where a body has several ways in or out. */
  readonly leaves: string;
  readonly enters: string;
  /** m3/s. */
  readonly flow: number;
  readonly is: { readonly stream: Stream } | { readonly exchange: Exchange };
}

/** Streams, then exchanges, in file order. */
export function writtenStreams({ network, streams }: Plant): WrittenStream[] {
  const places = [...network.feeds, ...network.compartments];
  const written = [
    ...places.flatMap((p) => p.streams.map((stream) => ({ ...whereOf(stream.at), is: { stream } }))),
    ...network.compartments.flatMap((c) =>
      c.exchanges.map((exchange) => ({ ...whereOf(exchange.at), is: { exchange } })),
    ),
  ];
  return streams.map(({ from, to, leaves, enters, flow }, i) => ({ from, to, leaves, enters, flow, ...written[i] }));
}

/**
 * Every flow between two nodes of a plant with its symbol and its line; what lies inside a compartment has the line of
 * that. Flows inside that run side by side, as forward flow and backflow do, are one.
 */
export function linksOf(plant: Plant): Link[] {
  const waiting = new Map<string, Link[]>();
  const ends = (from: number, to: number, flow: number): string => `${from} ${to} ${flow}`;
  for (const l of writtenStreams(plant).flatMap((s): Link[] => {
    const bothWays = "exchange" in s.is;
    const symbol = streamFlow(s.leaves, s.enters, bothWays);
    const link = (a: string, b: string): Link => ({
      from: plant.exit.get(a) ?? -1,
      to: plant.entry.get(b) ?? -1,
      flow: s.flow,
      symbol,
      says: bothWays ? `exchange of ${s.leaves} and ${s.enters}` : `stream ${a} to ${b}`,
      file: s.file,
      line: s.line,
    });
    return bothWays ? [link(s.leaves, s.enters), link(s.enters, s.leaves)] : [link(s.leaves, s.enters)];
  })) {
    const key = ends(l.from, l.to, l.flow);
    waiting.set(key, [...(waiting.get(key) ?? []), l]);
  }
  const links: Link[] = [];
  const inside = new Map<string, number>();
  plant.flow.forEach((flow, k) => {
    const [from, to] = [plant.from[k], plant.to[k]];
    const written = waiting.get(ends(from, to, flow))?.shift();
    const key = `${from} ${to}`;
    const at = inside.get(key);
    if (written) links.push(written);
    else if (at !== undefined) links[at] = { ...links[at], flow: links[at].flow + flow };
    else inside.set(key, links.push(inner(plant, from, to, flow)) - 1);
  });
  return links;
}

function inner({ nodes, network }: Plant, from: number, to: number, flow: number): Link {
  const [a, b] = [nodes[from].name, nodes[to].name];
  const body = network.compartments.find((c) => b === c.name || b.startsWith(`${c.name}.`));
  const says = `inside ${body?.name ?? network.title}`;
  return { from, to, flow, symbol: streamFlow(a, b), says, ...whereOf(body?.zones?.at?.flows ?? (body ?? network).at) };
}
