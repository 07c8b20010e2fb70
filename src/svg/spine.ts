import { px } from "./svg.js";

export interface Point {
  readonly x: number;
  readonly y: number;
}

/** One piece of a line that begins where the last one ended: straight to `to`, or a cubic with controls `a` and `b`. */
export type Piece = { readonly to: Point; readonly a?: Point; readonly b?: Point };

/** The middle line of a ribbon. */
export interface Spine {
  readonly start: Point;
  readonly pieces: readonly Piece[];
}

/** Path data of a spine. */
export function spinePath({ start, pieces }: Spine): string {
  const at = (p: Point): string => `${px(p.x)} ${px(p.y)}`;
  let d = `M${at(start)}`;
  for (const { to, a, b } of pieces) d += a && b ? `C${at(a)} ${at(b)} ${at(to)}` : `L${at(to)}`;
  return d;
}

/** Where a spine passes, about every `step` px, with the unit direction there. */
export function samples(
  { start, pieces }: Spine,
  step = 6,
): readonly (Point & { readonly dx: number; readonly dy: number })[] {
  const points: Point[] = [start];
  let from = start;
  for (const { to, a, b } of pieces) {
    const reach = a && b ? distance(from, a) + distance(a, b) + distance(b, to) : distance(from, to);
    const count = Math.max(1, Math.ceil(reach / step));
    for (let k = 1; k <= count; k++) points.push(a && b ? cubic(from, a, b, to, k / count) : mix(from, to, k / count));
    from = to;
  }
  return points.map((p, k) => {
    const before = points[Math.max(0, k - 1)];
    const after = points[Math.min(points.length - 1, k + 1)];
    const length = distance(before, after) || 1;
    return { ...p, dx: (after.x - before.x) / length, dy: (after.y - before.y) / length };
  });
}

/** From one height to another with level ends: the shape of a stream between two columns. */
export function levelled(from: Point, to: Point): readonly Piece[] {
  if (Math.abs(from.y - to.y) < 0.01) return [{ to }];
  const middle = (from.x + to.x) / 2;
  return [{ a: { x: middle, y: from.y }, b: { x: middle, y: to.y }, to }];
}

/** Right-angled way through corners, rounded with up to `radius` px. */
export function rounded(corners: readonly Point[], radius: number): Spine {
  const pieces: Piece[] = [];
  for (let k = 1; k < corners.length - 1; k++) {
    const [before, here, after] = [corners[k - 1], corners[k], corners[k + 1]];
    const r = Math.min(
      radius,
      distance(before, here) / (k === 1 ? 1 : 2),
      distance(here, after) / (k === corners.length - 2 ? 1 : 2),
    );
    const enter = toward(here, before, r);
    const leave = toward(here, after, r);
    const bend = 0.4477 * r; // 1 - 0.5523: a cubic's quarter circle
    pieces.push({ to: enter }, { a: toward(here, before, bend), b: toward(here, after, bend), to: leave });
  }
  pieces.push({ to: corners[corners.length - 1] });
  return { start: corners[0], pieces };
}

const distance = (p: Point, q: Point): number => Math.hypot(q.x - p.x, q.y - p.y);

const mix = (p: Point, q: Point, u: number): Point => ({ x: p.x + (q.x - p.x) * u, y: p.y + (q.y - p.y) * u });

function toward(p: Point, q: Point, length: number): Point {
  const all = distance(p, q);
  return all === 0 ? p : mix(p, q, length / all);
}

function cubic(p: Point, a: Point, b: Point, q: Point, u: number): Point {
  const v = 1 - u;
  const at = (k: "x" | "y"): number =>
    v * v * v * p[k] + 3 * v * v * u * a[k] + 3 * v * u * u * b[k] + u * u * u * q[k];
  return { x: at("x"), y: at("y") };
}
