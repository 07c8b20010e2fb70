import { rectangle } from "../svg/marks.js";
import { amount } from "./scale.js";
import type { FlowSheet, SheetBody, SheetStream, SheetUnit } from "./sheet.js";

/** Values nearer than this share of the larger are the same. */
const same = 1e-6;

/**
 * The second of two flow diagrams with what moved since the first: changed volumes and flows with both values, what is new,
 * and, as dashed outlines, what is gone. Bodies and streams are matched by name.
 */
export function compared(before: FlowSheet, after: FlowSheet): FlowSheet {
  const bodies = after.bodies.map((b) => comparedBody(before, b, after.units.volume));
  const goneBodies = before.bodies.filter((b) => !after.bodies.some((a) => a.name === b.name)).map(goneBody);
  const streams = after.streams.map((s) => comparedStream(before, s, after.units.flow));
  const goneStreams = before.streams
    .filter((s) => !after.streams.some((a) => sameWay(a, s)))
    .map((s): SheetStream => ({ ...s, gone: true, accent: true, label: `gone: ${amount(s.flow, after.units.flow)}` }));
  const changed =
    bodies.filter((b, k) => b !== after.bodies[k]).length + streams.filter((s, k) => s !== after.streams[k]).length;
  const moved = changed + goneBodies.length + goneStreams.length;
  return {
    ...after,
    title: before.title === after.title ? after.title : `${before.title} → ${after.title}`,
    says:
      moved === 0
        ? "nothing moved"
        : `${moved} ${moved === 1 ? "thing" : "things"} moved, marked; volumes and flows before → after`,
    bodies: [...bodies, ...goneBodies],
    streams: [...streams, ...goneStreams],
  };
}

function comparedBody(before: FlowSheet, b: SheetBody, unit: SheetUnit): SheetBody {
  const was = before.bodies.find((x) => x.name === b.name);
  if (!was) return { ...b, accent: true, note: joined("new", b.note) };
  if (differs(was.volume, b.volume))
    return { ...b, accent: true, note: joined(`was ${amount(was.volume, unit)}`, b.note) };
  return was.role === b.role ? b : { ...b, accent: true, note: joined(`was ${was.role}`, b.note) };
}

/** A terminal that is gone keeps its bar; a body leaves its outline. */
const goneBody = (b: SheetBody): SheetBody => ({
  ...b,
  accent: true,
  note: "gone",
  ...(b.picture ? { picture: (box) => rectangle(box, "ghost", Math.min(10, box.height / 4)) } : {}),
});

function comparedStream(before: FlowSheet, s: SheetStream, unit: SheetUnit): SheetStream {
  const was = before.streams.find((x) => sameWay(x, s));
  if (!was) return { ...s, accent: true, label: `new: ${s.label || amount(s.flow, unit)}` };
  if (!differs(was.flow, s.flow)) return s;
  return { ...s, accent: true, label: `${amount(was.flow, unit)} → ${amount(s.flow, unit)}` };
}

const sameWay = (a: SheetStream, b: SheetStream): boolean =>
  (a.role === "exchange") === (b.role === "exchange") &&
  ((a.from === b.from && a.to === b.to) || (a.role === "exchange" && a.from === b.to && a.to === b.from));

const differs = (a: number, b: number): boolean => Math.abs(a - b) > same * Math.max(Math.abs(a), Math.abs(b));

const joined = (first: string, second: string | undefined): string => (second ? `${first}, ${second}` : first);
