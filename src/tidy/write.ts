import { hasComments } from "./comments.js";
import type { CollectionPiece, EndComment, OwnComment, Part, Piece, ScalarPiece } from "./piece.js";

/** Braces and brackets stay on one line as long as it is not longer. */
const width = 100;
const step = 2;

/**
 * Takes the comments that speak of the whole file away from its first part: those above an empty line, and the line that
 * tells editors the schema, which comes first.
 */
export function takeHeader({ parts }: CollectionPiece): OwnComment[] {
  const first = parts[0];
  const above = first.before;
  const lastGap = above.findLastIndex((c) => c.blank);
  const gap = first.blank ? above.length : Math.max(0, lastGap);
  const header = above.filter((c, i) => i < gap || isModeline(c));
  const rest = above.filter((c, i) => i >= gap && !isModeline(c));
  above.splice(0, above.length, ...rest);
  return header.sort((a, b) => Number(isModeline(b)) - Number(isModeline(a)));
}

const isModeline = ({ text }: OwnComment): boolean => /^#\s*yaml-language-server:/.test(text);

/** The text of a document in canonical spacing, lines parted by `\n`. Comments at line ends keep their column where they can. */
export function write(header: readonly OwnComment[], root: CollectionPiece): string {
  const lines: string[] = [];
  header.forEach(({ text, blank }, i) => {
    if (blank && i > 0) lines.push("");
    lines.push(text);
  });
  writeParts(root, 0, lines);
  return `${lines.join("\n")}\n`;
}

function writeParts(piece: CollectionPiece, indent: number, lines: string[]): void {
  const pad = " ".repeat(indent);
  let opened = indent > 0 || lines.length === 0; // no empty line after the line that opens a collection
  const empty = (wanted: boolean): void => {
    if (wanted && !opened && lines.at(-1) !== "") lines.push("");
    opened = false;
  };
  for (const part of piece.parts) {
    const { above, end } = commentsOf(part, piece.type, indent);
    for (const { text, blank } of above) {
      empty(blank);
      lines.push(pad + text);
    }
    empty(part.blank);
    if (piece.type === "map") writeValue(`${pad}${part.key}:`, part.value, indent, end, lines);
    else writeItem(pad, part.value, indent, end, lines);
  }
  for (const { text, blank } of piece.end) {
    empty(blank);
    lines.push(pad + text);
  }
}

/** A line has room for one comment at its end, and an item laid out over lines for none: the others go above. */
function commentsOf(part: Part, type: "map" | "list", indent: number): { above: OwnComment[]; end?: EndComment } {
  const above = [...part.before];
  const ends = [...part.ends];
  const end = type === "list" && isLaidOut(part.value, indent + step) ? undefined : ends.pop();
  for (const { text } of ends) above.push({ text, blank: false });
  if (type === "list" && isLaidOut(part.value, indent + step)) above.push(...firstComments(part.value));
  return end ? { above, end } : { above };
}

/** Takes the comments above the first part of an item, at any depth, out of it: they cannot stand between dash and part. */
function firstComments(piece: Piece): OwnComment[] {
  if (piece.type === "scalar" || piece.parts.length === 0) return [];
  const taken = piece.parts[0].before.splice(0);
  return piece.type === "list" ? [...taken, ...firstComments(piece.parts[0].value)] : taken;
}

/** Must the collection be laid out over lines, when its text would begin at a column? */
function isLaidOut(piece: Piece, column: number): boolean {
  if (piece.type === "scalar") return false;
  const text = oneLine(piece);
  return text === undefined || column + text.length > width;
}

/** A collection in braces or brackets on one line; undefined where it holds comments or a scalar over several lines. */
function oneLine(piece: Piece): string | undefined {
  const anchor = piece.anchor === undefined ? "" : `&${piece.anchor} `;
  if (piece.type === "scalar") return piece.form === "line" ? (anchor + piece.text).trimEnd() : undefined;
  if ((!piece.flow && piece.parts.length > 0) || hasComments(piece)) return undefined;
  const parts: string[] = [];
  for (const { key, value } of piece.parts) {
    const text = oneLine(value);
    if (text === undefined) return undefined;
    parts.push(key === undefined ? text : `${key}: ${text}`.trimEnd());
  }
  return anchor + (piece.type === "map" ? `{${parts.join(", ")}}` : `[${parts.join(", ")}]`);
}

function writeItem(pad: string, piece: Piece, indent: number, end: EndComment | undefined, lines: string[]): void {
  if (piece.type === "scalar" || !isLaidOut(piece, indent + step)) {
    writeValue(`${pad}-`, piece, indent, end, lines);
    return;
  }
  if (piece.anchor !== undefined) lines.push(`${pad}- &${piece.anchor}`);
  const at = lines.length;
  writeParts(piece, indent + step, lines);
  if (piece.anchor === undefined) lines[at] = `${pad}- ${lines[at].slice(indent + step)}`;
}

/** What follows `key:` or a dash. */
function writeValue(head: string, piece: Piece, indent: number, end: EndComment | undefined, lines: string[]): void {
  const anchor = piece.anchor === undefined ? "" : ` &${piece.anchor}`;
  if (piece.type === "scalar") {
    writeScalar(`${head}${anchor}`, piece, indent, end, lines);
  } else if (isLaidOut(piece, head.length + 1)) {
    // The column was that of a longer line where the collection stood in braces.
    const at = end && piece.flow ? { ...end, column: 0 } : end;
    lines.push(withComment(head + anchor, at));
    writeParts(piece, indent + step, lines);
  } else lines.push(withComment(`${head} ${oneLine(piece)}`, end));
}

function writeScalar(
  head: string,
  { form, text, base }: ScalarPiece,
  indent: number,
  end: EndComment | undefined,
  lines: string[],
): void {
  const [first, ...rest] = text.split(/\r?\n/);
  const inner = " ".repeat(indent + step);
  if (form === "line") lines.push(withComment(text === "" ? head : `${head} ${text}`, end));
  else if (form === "lines") {
    const all = [`${head} ${first}`, ...rest.map((line) => (line.trim() === "" ? "" : inner + line.trimStart()))];
    const last = all.pop() ?? "";
    lines.push(...all, withComment(last, end));
  } else {
    const header = /^[|>][-+1-9]*/.exec(first)?.[0] ?? "|";
    lines.push(withComment(`${head} ${header}`, end));
    const own = " ".repeat(indent + Number(/\d/.exec(header)?.[0] ?? step));
    const content = rest.map((line) => (line.slice(0, base).trim() === "" ? own + line.slice(base) : line));
    if (rest.at(-1) === "") content.pop();
    if (!header.includes("+")) while (content.at(-1)?.trim() === "") content.pop();
    lines.push(...content.map((line) => (line.length > own.length ? line : line.trimEnd())));
  }
}

const withComment = (line: string, end: EndComment | undefined): string =>
  end ? line.padEnd(Math.max(end.column, line.length + step)) + end.text : line;
