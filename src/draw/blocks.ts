import type { Box } from "../svg/svg.js";
import { type Caption, caption, extent, moved, type Words } from "./caption.js";
import { amount, bodySize, type Scale } from "./scale.js";
import type { FlowSheet, SheetBody, SheetStream } from "./sheet.js";

/** A body in its place. */
export interface Placed {
  readonly body: SheetBody;
  readonly box: Box;
}

/** An exchange between a body and the one below it: two opposed arcs between x - 8 and x + 8, from `top` to `bottom`. */
export interface Arcs {
  readonly stream: SheetStream;
  readonly x: number;
  readonly top: number;
  readonly bottom: number;
}

/**
 * What moves as one: a body with its caption above and, below, those that only exchange with it.
 * Coordinates are relative to the middle of the body that streams enter and leave.
 */
export interface Block {
  readonly name: string;
  readonly role: SheetBody["role"];
  /** The body's half width and half height. */
  readonly half: { readonly width: number; readonly height: number };
  readonly bodies: readonly Placed[];
  readonly captions: readonly Caption[];
  readonly arcs: readonly Arcs[];
  /** How far it reaches from its middle. */
  readonly reach: { readonly left: number; readonly right: number; readonly above: number; readonly below: number };
}

const arcRoom = 36;
const sideBySide = 22;
const captionGap = 5;

/** Name, volume and note of a body in at most three lines. */
export function bodyWords(body: SheetBody, sheet: FlowSheet, scale: Scale): readonly Words[] {
  const name: Words = { words: body.label ?? body.name, style: "name" };
  const parts: string[] = [];
  if (body.volume > 0) parts.push(amount(body.volume, sheet.units.volume));
  if (body.volume > 0 && body.volume * scale.area < 0.98 * 64) parts.push("drawn larger");
  if (body.note) parts.push(body.note);
  const second: readonly Words[] =
    parts.length === 0
      ? []
      : [{ words: parts.join(", "), style: body.accent ? "look" : "quiet", underlined: body.fitted }];
  return [name, ...second, ...(body.tilesSay ? [{ words: body.tilesSay, style: "quiet" as const }] : [])];
}

/**
 * The block of a body that streams pass through.
 * @param hanging bodies that only exchange, by the body that they hang on
 * @param stack   half the height of its streams side by side, px: captions keep clear of them
 */
export function bodyBlock(
  body: SheetBody,
  sheet: FlowSheet,
  scale: Scale,
  stack: number,
  hanging: ReadonlyMap<string, readonly SheetStream[]>,
): Block {
  const size = bodySize(body, scale);
  const half = { width: size.width / 2, height: size.height / 2 };
  const top = Math.max(half.height, stack);
  const words = bodyWords(body, sheet, scale);
  const own = caption(words, 0, -top - captionGap - extent(words).height, "middle");
  const edge = stack > half.height ? stack + 3 : half.height; // what hangs keeps clear of the streams at the sides
  const lower = hangingRow(body.name, edge, sheet, scale, hanging);
  const side = Math.max(half.width, own.box.width / 2);
  return {
    name: body.name,
    role: body.role,
    half,
    bodies: [{ body, box: { x: -half.width, y: -half.height, ...size } }, ...lower.bodies],
    captions: [own, ...lower.captions],
    arcs: lower.arcs.map((a) => (a.top === edge ? { ...a, top: half.height } : a)),
    reach: {
      left: Math.max(side, lower.left),
      right: Math.max(side, lower.right),
      above: -own.box.y,
      below: Math.max(top, edge + lower.height),
    },
  };
}

/** A feed or an outlet: a bar as high as its streams, its words outside. `words` after the name: its flow. */
export function terminalBlock(body: SheetBody, flow: string, stack: number): Block {
  const words: readonly Words[] = [
    { words: body.label ?? body.name, style: "name" },
    { words: body.note ? `${flow}, ${body.note}` : flow, style: body.accent ? "look" : "quiet" },
  ];
  const { width, height } = extent(words);
  const half = { width: 2, height: Math.max(stack, 6) };
  const feed = body.role === "feed";
  const reach = Math.max(half.height, height / 2);
  return {
    name: body.name,
    role: body.role,
    half,
    bodies: [{ body, box: { x: -half.width, y: -half.height, width: 4, height: 2 * half.height } }],
    captions: [caption(words, feed ? -10 : 10, -height / 2, feed ? "end" : "start")],
    arcs: [],
    reach: { left: feed ? 10 + width : 2, right: feed ? 2 : 10 + width, above: reach, below: reach },
  };
}

/** A junction: a dot no wider than its widest stream, named only by its streams. */
export function junctionBlock(body: SheetBody, widest: number, stack: number): Block {
  const r = Math.min(Math.max(widest, 5), 16) / 2;
  const own = caption(
    [{ words: body.label ?? body.name, style: "quiet" }],
    0,
    -Math.max(r, stack) - captionGap - 14,
    "middle",
  );
  return {
    name: body.name,
    role: body.role,
    half: { width: r, height: r },
    bodies: [{ body, box: { x: -r, y: -r, width: 2 * r, height: 2 * r } }],
    captions: [own],
    arcs: [],
    reach: { left: own.box.width / 2, right: own.box.width / 2, above: -own.box.y, below: Math.max(r, stack) },
  };
}

/** A stream's label in its style. */
export const labelWords = ({ label, accent, fitted }: SheetStream): Words => ({
  words: label,
  style: accent ? "look" : "plain",
  underlined: fitted,
});

interface Row {
  /** How far it reaches from the middle of what it hangs on, px. */
  readonly left: number;
  readonly right: number;
  readonly height: number;
  readonly bodies: readonly Placed[];
  readonly captions: readonly Caption[];
  readonly arcs: readonly Arcs[];
}

/** All that hangs on a body, side by side below `edge`, each with what hangs on it in turn. */
function hangingRow(
  host: string,
  edge: number,
  sheet: FlowSheet,
  scale: Scale,
  hanging: ReadonlyMap<string, readonly SheetStream[]>,
): Row {
  const cells = (hanging.get(host) ?? []).map((stream) => {
    const name = stream.from === host ? stream.to : stream.from;
    const body = sheet.bodies.find((b) => b.name === name)!;
    const size = bodySize(body, scale);
    const lower = hangingRow(name, size.height, sheet, scale, hanging);
    const words = bodyWords(body, sheet, scale);
    const under = extent(words);
    const flow = extent([{ words: stream.label, style: "plain" }]).width;
    // the name stands below a body, beside the arcs of what hangs further down
    const name2 =
      lower.right > 0
        ? caption(words, size.width / 2 + 6, size.height / 2 - under.height / 2)
        : caption(words, 0, size.height + captionGap - 2, "middle");
    const left = Math.max(size.width / 2, 14, lower.left, -name2.box.x);
    const right = Math.max(size.width / 2, 14 + flow, lower.right, name2.box.x + name2.box.width);
    const height = arcRoom + (lower.right > 0 ? size.height + lower.height : size.height + captionGap + under.height);
    return { stream, body, size, lower, name2, left, right, height };
  });
  const width = cells.reduce((sum, c) => sum + c.left + c.right, 0) + Math.max(0, cells.length - 1) * sideBySide;
  const row = { bodies: [] as Placed[], captions: [] as Caption[], arcs: [] as Arcs[] };
  // one alone hangs straight below
  const start = cells.length === 1 ? cells[0].left : width / 2;
  let edgeLeft = -start;
  for (const { stream, body, size, lower, name2, left, right } of cells) {
    const x = edgeLeft + left;
    const y = edge + arcRoom;
    row.bodies.push({ body, box: { x: x - size.width / 2, y, ...size } });
    row.arcs.push({ stream, x, top: edge, bottom: y });
    row.captions.push(caption([labelWords(stream)], x + 13, edge + arcRoom / 2 - 7), moved(name2, x, y));
    // what hangs further down was measured from this body's own top
    row.bodies.push(...lower.bodies.map((p) => ({ ...p, box: { ...p.box, x: p.box.x + x, y: p.box.y + y } })));
    row.captions.push(...lower.captions.map((c) => moved(c, x, y)));
    row.arcs.push(...lower.arcs.map((a) => ({ ...a, x: a.x + x, top: a.top + y, bottom: a.bottom + y })));
    edgeLeft += left + right + sideBySide;
  }
  return { left: start, right: width - start, height: Math.max(0, ...cells.map((cell) => cell.height)), ...row };
}
