/** A comment that has a line to itself. */
export interface OwnComment {
  readonly text: string;
  /** An empty line stands before it. */
  readonly blank: boolean;
}

/** A comment at the end of a line, and the column (from 0) where the author began it; 0 where that column means nothing. */
export interface EndComment {
  readonly text: string;
  readonly column: number;
}

/** A YAML document cut into slices of its source, ready to be put in another order. */
export type Piece = ScalarPiece | CollectionPiece;

/** `text` is the source as typed: quotes, number spelling and all; an alias with its asterisk. */
export interface ScalarPiece {
  readonly type: "scalar";
  /** One line; plain or quoted over several lines; or a block that `|` or `>` begins. */
  readonly form: "line" | "lines" | "block";
  readonly anchor: string | undefined;
  readonly text: string;
  /** The name, where it is an alias. */
  readonly alias: string | undefined;
  /** Of a block: the column that its content begins at. */
  readonly base: number;
}

export interface CollectionPiece {
  readonly type: "map" | "list";
  readonly flow: boolean;
  readonly anchor: string | undefined;
  /** Offsets in the source, `to` exclusive; the column of `from`. */
  readonly from: number;
  readonly to: number;
  readonly column: number;
  parts: Part[];
  /** Comments after the last part. */
  readonly end: OwnComment[];
}

/** An entry of a map, or an item of a list (without a key). */
export interface Part {
  /** As typed, quotes and anchor included. */
  readonly key: string | undefined;
  /** The key that it means; empty in a list. */
  readonly name: string;
  readonly value: Piece;
  /** Offset of its first character, the dash of an item left out. */
  readonly from: number;
  readonly before: OwnComment[];
  readonly ends: EndComment[];
  /** An empty line stands right before it. */
  blank: boolean;
}
