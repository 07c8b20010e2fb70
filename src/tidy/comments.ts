import { Parser } from "yaml";
import type { CollectionPiece, OwnComment, Part, Piece } from "./piece.js";
import { columnOf, indentAt, startsLine, startsLineAfterBlank } from "./source-lines.js";

interface Comment {
  readonly at: number;
  readonly text: string;
  readonly column: number;
  /** It has a line to itself. */
  readonly own: boolean;
  readonly blank: boolean;
}

/**
 * Gives each comment of a text to the part that it speaks of: one at the end of a line to what stands before it, one
 * with a line to itself to what follows it at its depth.
 */
export function attachComments(text: string, root: CollectionPiece): void {
  for (const comment of commentsIn(text)) attach(comment, root, text);
}

/** Comments in the order of the text. The lexer tells them from `#` in quotes and in block scalars. */
function commentsIn(text: string): Comment[] {
  const found: Comment[] = [];
  const walk = (token: unknown): void => {
    if (token === null || typeof token !== "object") return;
    const { type, offset, source, ...inside } = token as { type?: string; offset?: number; source?: string };
    if (type === "comment" && offset !== undefined && source !== undefined) {
      const own = startsLine(text, offset) || endsDocument(text, offset);
      found.push({
        at: offset,
        text: source.trimEnd(),
        // Behind the dash of an item it counts as above the item.
        column: startsLine(text, offset) ? indentAt(text, offset) : columnOf(text, offset),
        own,
        blank: startsLineAfterBlank(text, offset),
      });
    } else for (const value of Object.values(Array.isArray(token) ? token : inside)) walk(value);
  };
  for (const token of new Parser().parse(text)) walk(token);
  return found.sort((a, b) => a.at - b.at);
}

/** Does it stand behind the `...` that ends a document? That goes, and the comment speaks of nothing on a line. */
const endsDocument = (text: string, at: number): boolean =>
  /(^|\n)\.\.\.[ \t]*$/.test(text.slice(Math.max(0, at - 80), at));

function attach(comment: Comment, piece: CollectionPiece, text: string): void {
  const last = piece.parts.findLastIndex((p) => p.from < comment.at);
  if (last < 0) {
    piece.parts[0].before.push(ownComment(comment));
    return;
  }
  const part = piece.parts[last];
  if (isFilled(part.value) && belongs(comment, part.value, piece)) attach(comment, part.value, text);
  else if (!comment.own)
    part.ends.push({ text: comment.text, column: startsLine(text, part.from) ? comment.column : 0 });
  else (piece.parts[last + 1]?.before ?? piece.end).push(ownComment(comment));
}

/** Does the comment lie in the inner collection, rather than beside it in the outer one? */
function belongs(comment: Comment, inner: CollectionPiece, outer: CollectionPiece): boolean {
  if (inner.flow) return comment.at >= inner.from && comment.at < inner.to;
  if (comment.at < inner.parts[0].from) return comment.own;
  if (!comment.own || inner.parts.some((p) => p.from > comment.at)) return true;
  // A list may stand at the column of its key: then the column decides for the next key.
  return comment.column >= inner.column && comment.column > outer.column;
}

const isFilled = (piece: Piece): piece is CollectionPiece => piece.type !== "scalar" && piece.parts.length > 0;

const ownComment = ({ text, blank }: Comment): OwnComment => ({ text, blank });

/** True where a comment lies anywhere inside. */
export function hasComments(piece: Piece): boolean {
  if (piece.type === "scalar") return false;
  return piece.end.length > 0 || piece.parts.some(isCommented);
}

const isCommented = ({ before, ends, value }: Part): boolean =>
  before.length > 0 || ends.length > 0 || hasComments(value);
