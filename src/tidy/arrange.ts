import { type RecordShape, type Shape, sortOf } from "../schema/shape.js";
import type { CollectionPiece, Part, Piece } from "./piece.js";

/**
 * Puts the keys of every record in the order of its declaration; names of the author's own, lists and unknown keys keep
 * theirs, the unknown after the known. An alias never comes before its anchor.
 */
export function arrange(piece: Piece, shape: Shape | undefined): void {
  if (piece.type === "scalar" || !shape) return;
  const inner = narrow(shape, piece);
  if (piece.type === "list") {
    for (const { value } of piece.parts) arrange(value, inner?.is === "list" ? inner.of : undefined);
  } else if (inner?.is === "named") {
    for (const { value } of piece.parts) arrange(value, inner.each);
  } else if (inner?.is === "record") {
    for (const { name, value } of piece.parts) {
      arrange(value, Object.hasOwn(inner.keys, name) ? inner.keys[name].shape : undefined);
    }
    order(piece, inner);
  }
}

/** The one shape among alternatives that fits what stands there. */
function narrow(shape: Shape, piece: CollectionPiece): Shape | undefined {
  if (shape.is === "either") {
    const one = shape.of.find((s) => s.is !== "nothing" && sortOf(s) === piece.type);
    return one && narrow(one, piece);
  }
  const under = (key: string): Piece | undefined => piece.parts.find((p) => p.name === key)?.value;
  if (shape.is === "depends") return under(shape.on) ? shape.present : shape.absent;
  if (shape.is !== "variant") return shape;
  const kind = under(shape.by);
  const name = kind?.type === "scalar" ? kind.text.replace(/^(["'])(.*)\1$/, "$2") : "";
  return Object.hasOwn(shape.of, name) ? { is: "record", keys: shape.of[name].keys } : undefined;
}

function order(piece: CollectionPiece, { keys }: RecordShape): void {
  const rank = new Map(Object.keys(keys).map((key, i) => [key, i]));
  const rankOf = ({ name }: Part): number => rank.get(name) ?? rank.size;
  const first = piece.parts[0];
  const anchors = new Map(piece.parts.map((part) => [part, anchorsIn(part.value)]));
  const sorted = [...anchors.values()].every(({ named }) => named.size === 0)
    ? piece.parts.toSorted((a, b) => rankOf(a) - rankOf(b))
    : sortedWithin(piece.parts, rankOf, anchors);
  piece.parts = sorted;
  // Whoever was first had no empty line before it to bring along.
  if (first && sorted[0] !== first) swapBlanks(sorted[0], first);
}

/** By rank as far as anchors and aliases let it: always the lowest of those that nothing left must precede. */
function sortedWithin(
  parts: readonly Part[],
  rankOf: (part: Part) => number,
  anchors: ReadonlyMap<Part, Anchors>,
): Part[] {
  const waiting = [...parts];
  const before = (a: Part, b: Part): boolean => mustPrecede(anchors.get(a) ?? none, anchors.get(b) ?? none);
  return parts.map(() => {
    const free = waiting.filter((part, i) => !waiting.slice(0, i).some((earlier) => before(earlier, part)));
    const next = free.reduce((least, part) => (rankOf(part) < rankOf(least) ? part : least));
    waiting.splice(waiting.indexOf(next), 1);
    return next;
  });
}

function swapBlanks(a: Part, b: Part): void {
  const [ofA, ofB] = [leadingBlank(a), leadingBlank(b)];
  setLeadingBlank(a, ofB);
  setLeadingBlank(b, ofA);
}

const leadingBlank = ({ before, blank }: Part): boolean => before[0]?.blank ?? blank;

function setLeadingBlank(part: Part, blank: boolean): void {
  if (part.before.length > 0) part.before[0] = { ...part.before[0], blank };
  else part.blank = blank;
}

interface Anchors {
  readonly named: ReadonlySet<string>;
  readonly used: ReadonlySet<string>;
}

const none: Anchors = { named: new Set(), used: new Set() };

function anchorsIn(piece: Piece): Anchors {
  const [named, used] = [new Set<string>(), new Set<string>()];
  const look = (p: Piece): void => {
    if (p.anchor !== undefined) named.add(p.anchor);
    if (p.type === "scalar") {
      if (p.alias !== undefined) used.add(p.alias);
    } else for (const { value } of p.parts) look(value);
  };
  look(piece);
  return { named, used };
}

/** One must stay before the other where an anchor is named in one and used or named anew in the other. */
const mustPrecede = (a: Anchors, b: Anchors): boolean =>
  [...a.named].some((n) => b.used.has(n) || b.named.has(n)) || [...a.used].some((n) => b.named.has(n));
