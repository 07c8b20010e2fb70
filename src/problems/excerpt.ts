import { lineText, placeOf, type Span } from "../text/source.js";

/** So many columns of a line are shown; a longer one is cut to a window around the mark. */
const window = 100;
/** Shown before the mark when the line is cut. */
const lead = 30;
const tabWidth = 4;
/** UTF-16 units before the mark, and half of those after its start, that are looked at. */
const near = 1000;

export interface Excerpt {
  readonly line: number;
  readonly text: string;
  /** Columns before the mark, and under it (at least 1). */
  readonly before: number;
  readonly under: number;
}

/** The first line of a span as a terminal can show it, and where in it the marks stand. */
export function excerpt(span: Span): Excerpt {
  const { line, column, endLine, endColumn } = placeOf(span);
  const whole = lineText(span.source, line);
  const start = Math.min(column - 1, whole.length);
  const end = endLine > line ? whole.trimEnd().length : Math.min(endColumn - 1, whole.length);
  // Of a very long line only what may be seen is looked at.
  const skipped = Math.max(0, start - near);
  const raw = whole.slice(skipped, start + 2 * near);
  const cells = cellsOf(raw);
  const from = columnAt(cells, start - skipped);
  const to = Math.max(from + 1, columnAt(cells, Math.min(end - skipped, raw.length)));
  return cut(cells, line, from, to, skipped > 0, skipped + raw.length < whole.length);
}

/** One printed character and the columns that it takes. */
interface Cell {
  readonly text: string;
  readonly width: number;
  /** Its offset in the line, UTF-16 units. */
  readonly at: number;
}

function cellsOf(raw: string): Cell[] {
  const cells: Cell[] = [];
  let at = 0;
  let column = 0;
  for (const letter of raw) {
    const width = letter === "\t" ? tabWidth - (column % tabWidth) : widthOf(letter);
    cells.push({ text: letter === "\t" ? " ".repeat(width) : harmless(letter), width, at });
    at += letter.length;
    column += width;
  }
  return cells;
}

function columnAt(cells: readonly Cell[], offset: number): number {
  let column = 0;
  for (const cell of cells) {
    if (cell.at >= offset) break;
    column += cell.width;
  }
  return column;
}

function cut(
  cells: readonly Cell[],
  line: number,
  from: number,
  to: number,
  moreBefore: boolean,
  moreAfter: boolean,
): Excerpt {
  const total = cells.reduce((sum, cell) => sum + cell.width, 0);
  if (total <= window && !moreBefore && !moreAfter)
    return { line, text: cells.map((c) => c.text).join(""), before: from, under: to - from };
  const start = Math.max(0, Math.min(from - lead, total - window));
  const end = start + window;
  let column = 0;
  let text = "";
  let shift = start;
  for (const cell of cells) {
    if (column >= start && column + cell.width <= end) {
      if (text === "") shift = column;
      text += cell.text;
    }
    column += cell.width;
  }
  const head = start > 0 || moreBefore ? "…" : "";
  const before = from - shift + head.length;
  return {
    line,
    text: `${head}${text}${end < total || moreAfter ? "…" : ""}`,
    before,
    under: Math.max(1, Math.min(to, end) - from),
  };
}

/** Columns that a terminal gives a character: none to marks that combine, two to wide scripts and pictures. */
function widthOf(letter: string): number {
  if (/\p{Mark}|\u200d|\ufe0f/u.test(letter)) return 0;
  return /[\u1100-\u115f\u2e80-\ua4cf\uac00-\ud7a3\uf900-\ufaff\ufe30-\ufe6f\uff00-\uff60\uffe0-\uffe6]|\p{Emoji_Presentation}/u.test(
    letter,
  )
    ? 2
    : 1;
}

/** Control characters would move the cursor, or worse: they are shown as a sign. */
export const harmless = (text: string): string =>
  text.replace(/\s*[\r\n]\s*/g, " ").replace(/[\p{Cc}\u2028\u2029\u202a-\u202e\u2066-\u2069\ufeff]/gu, "�");
