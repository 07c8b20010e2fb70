import { element, line } from "../svg/marks.js";
import { type Box, px, type Svg } from "../svg/svg.js";
import { caption, drawCaption, extent, type Words } from "./caption.js";
import { type Cut, folded } from "./fold.js";
import { separated } from "./heights.js";
import type { Layout } from "./layout.js";
import { drawPieces } from "./pieces.js";

/** Longer drawings than `most` would be printed smaller than 7 pt on A4: they are folded to about `wanted` px. */
const length = { most: 860, wanted: 800 };
const lead = 26; // px at a cut for the letters of its streams
const rowGap = 22; // px
const rim = 6; // px around a drawing for what is drawn a little beyond its box: outlines, letters
const ends = 24; // px beyond both ends of a drawing, where a reader's type is wider than what was measured

/** A layout as it stands on the page: as it is, or, where it is long, cut into rows, with a line that says so. */
export function inRows(layout: Layout): {
  readonly parts: readonly Svg[];
  readonly bounds: Box;
  readonly says: string;
} {
  const { bounds } = layout;
  const rows = bounds.width > length.most ? folded(stripOf(layout), length.wanted) : [];
  if (rows.length < 2) return { parts: drawPieces(layout), bounds, says: "" };
  const height = bounds.height + rowGap;
  const parts = rows.map(({ from, to, enter, leave }, k) => {
    const [before, behind] = [k === 0 ? ends : 0, k === rows.length - 1 ? ends : 0];
    const window = { ...grown(bounds, rim), x: from - before, width: to - from + before + behind };
    const left = k === 0 ? bounds.x - ends : bounds.x + lead;
    const top = bounds.y - rim + k * height;
    const at = { x: left, y: top, width: window.width, height: window.height };
    const view = [window.x, window.y, window.width, window.height].map(px).join(" ");
    return (
      element("svg", { ...at, viewBox: view }, drawPieces(layout, window).join("")) +
      letters(enter, left - 5, k * height, "end") +
      letters(leave, left + window.width + 5, k * height, "start")
    );
  });
  const width = Math.max(...rows.map((r, k) => r.to - r.from + (k === 0 ? 0 : lead) + lead));
  return {
    parts,
    bounds: { ...bounds, width, height: rows.length * height - rowGap },
    says: `drawn in ${rows.length} rows: where a stream is cut it goes on at the same letter`,
  };
}

const grown = (b: Box, by: number): Box => ({
  x: b.x - by,
  y: b.y - by,
  width: b.width + 2 * by,
  height: b.height + 2 * by,
});

/** What stays whole: bodies with what hangs on them, words, marks and the streams' labels. */
function stripOf(layout: Layout): Parameters<typeof folded>[0] {
  return {
    bounds: layout.bounds,
    whole: [
      ...layout.bodies.map((b) => b.box),
      ...layout.captions.map((c) => c.box),
      ...layout.labels.map((l) => l.caption.box),
      ...layout.parts.flatMap(({ box, title }) => [
        title.box,
        { ...box, width: 1 },
        { ...box, x: box.x + box.width, width: 1 },
      ]),
      ...layout.arcs.map((a) => ({ x: a.x - 10, y: a.top, width: 20, height: a.bottom - a.top })),
      ...layout.marks.map((m) => ({ x: m.x - 8, y: m.y - 9, width: 16, height: 18 })),
      ...layout.manifolds.map((m) => ({ x: m.x - 2, y: m.top, width: 4, height: m.bottom - m.top })),
    ],
    ribbons: layout.ribbons.map(({ spine, trip }) => ({ spine, width: trip.width })),
  };
}

/** The letters beside a cut, apart from one another, tied to their streams where they had to move. */
function letters(cuts: readonly Cut[], x: number, down: number, anchor: "start" | "end"): Svg {
  const words = (letter: string): readonly Words[] => [{ words: letter, style: "name" }];
  const ys = separated(
    cuts.map((c) => c.y),
    cuts.map(() => 1),
    cuts.slice(1).map(() => 12),
  );
  return cuts
    .map(({ y, letter }, k) => {
      const away = Math.abs(ys[k] - y) > 4;
      const out = anchor === "start" ? 1 : -1;
      const place = x + (away ? 7 * out : 0);
      const tie = away ? line(x - 4 * out, y + down, place - out, ys[k] + down, "leader") : "";
      return tie + drawCaption(caption(words(letter), place, ys[k] + down - extent(words(letter)).height / 2, anchor));
    })
    .join("");
}
