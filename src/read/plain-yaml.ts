import type { Source, Span } from "../text/source.js";
import { deepest } from "./grow.js";
import type { Entry, ListNode, MapNode, ScalarNode, Tree } from "./tree.js";

/**
 * The tree of a text that keeps to the YAML that people write by hand: maps by indent, braces and brackets that close on
 * their line, single-line texts, comments. Some ten times as fast as a whole YAML parser, which is most of the time of a check.
 * @returns undefined where anything else stands in the text, be it right or wrong: that is for the whole parser to read or refuse
 */
export function plainYaml(source: Source): MapNode | undefined {
  const reader = new Reader(source);
  try {
    return reader.document();
  } catch (e) {
    if (e === elsewhere) return undefined;
    throw e;
  }
}

/** Thrown where the whole parser is wanted. */
const elsewhere = Symbol("not plain");

const refuse = (): never => {
  throw elsewhere;
};

/** A line that says something. */
interface Line {
  readonly indent: number;
  /** Where its first sign stands, and where what it says ends: before a comment and the blanks before that. */
  readonly from: number;
  readonly to: number;
  /** Behind its line break. */
  readonly end: number;
  /** The text of many lines that begins here, and where it ends. */
  readonly folded?: { readonly text: string; readonly from: number; readonly to: number };
}

const keyPattern = /[A-Za-z][\w.-]*(?=:(?:[ \n]|$))/y;
const keyInBraces = /[A-Za-z][\w.-]*(?=: )/y;
/** What begins a plain text: a letter, a digit, a sign of a number, a bracket of a formula. */
const plainStart = /[A-Za-z0-9(.+/\u0080-\uffff]|-(?=[\w.])/y;

class Reader {
  private readonly text: string;
  private readonly lines: Line[];
  private next = 0;

  constructor(private readonly source: Source) {
    this.text = source.text;
    this.lines = [];
  }

  document(): MapNode {
    this.split();
    if (this.lines.length === 0) refuse();
    const map = this.block(this.lines[0].indent, 0);
    if (this.next < this.lines.length || map.type !== "map") return refuse();
    return map;
  }

  /** Lines without those that are blank or nothing but comment. */
  private split(): void {
    const { text } = this;
    // Tabs, returns and what is no sign for print: others know better what they do. Marks of documents, too.
    // biome-ignore lint/suspicious/noControlCharactersInRegex: those are what it looks for
    if (/[\u0000-\u0009\u000b-\u001f\u007f-\u009f\u2028\u2029\ufeff]|^(?:---|\.\.\.|%)/m.test(text)) refuse();
    let start = 0;
    let remark = 0; // indent of a comment since the last line
    let sign = -1; // where the next comment behind something begins, or the end
    while (start < text.length) {
      let end = text.indexOf("\n", start);
      if (end < 0) end = text.length;
      let from = start;
      while (text[from] === " ") from++;
      if (text[from] === "#") remark = Math.max(remark, from - start);
      else if (from < end) {
        // A comment at the end of what stands deeper belongs to that.
        if (remark > from - start) refuse();
        remark = 0;
        let to = end;
        if (sign < from) sign = text.indexOf(" #", from);
        if (sign < 0) sign = text.length;
        const comment = commentIn(text, from, end, sign);
        if (comment >= 0) to = comment;
        while (text[to - 1] === " ") to--;
        const line = { indent: from - start, from, to, end: Math.min(end + 1, text.length) };
        if (text[to - 1] === "-" && text.startsWith(": >-", to - 4)) {
          if (comment >= 0) refuse();
          const folded = this.folded(line);
          this.lines.push({ ...line, to: line.end, end: folded.to, folded });
          end = folded.to - 1;
        } else this.lines.push(line);
      }
      start = end + 1;
    }
    if (remark > 0) refuse();
  }

  /** The lines of a `>-`, folded: all at one indent, none of them blank. */
  private folded(header: Line): { text: string; from: number; to: number } {
    const { text } = this;
    const words: string[] = [];
    let indent = -1;
    let start = header.end;
    while (start < text.length) {
      let from = start;
      while (text[from] === " ") from++;
      let end = text.indexOf("\n", start);
      if (end < 0) end = text.length;
      if (from === end) break; // a blank line ends it, or does not: then the next line says so
      if (from - start <= header.indent) break;
      if (indent < 0) indent = from - start;
      if (from - start !== indent || text[end - 1] === " ") refuse();
      words.push(text.slice(from, end));
      start = Math.min(end + 1, text.length);
    }
    if (words.length === 0 || text[start - 1] !== "\n") refuse();
    let next = start;
    while (text[next] === "\n") next++;
    let after = next;
    while (text[after] === " ") after++;
    if (after - next > header.indent || (text[next] === " " && text[after] === "\n")) refuse();
    return { text: words.join(" "), from: header.to - 2, to: start };
  }

  /** The map or list whose lines stand at an indent. */
  private block(indent: number, depth: number): MapNode | ListNode {
    if (depth > deepest) refuse();
    const first = this.lines[this.next];
    return this.text.startsWith("- ", first.from) ? this.list(indent, depth) : this.map(indent, depth);
  }

  private map(indent: number, depth: number): MapNode {
    const entries: Entry[] = [];
    const seen = new Set<string>();
    const { from } = this.lines[this.next];
    let to = from;
    for (let line = this.lines[this.next]; line && line.indent === indent; line = this.lines[this.next]) {
      keyPattern.lastIndex = line.from;
      const name = keyPattern.exec(this.text)?.[0];
      if (name === undefined || seen.has(name)) return refuse();
      seen.add(name);
      const colon = line.from + name.length;
      const key = this.scalar(line.from, colon);
      this.next++;
      const value = this.value(line, colon + 1, indent, depth);
      to = this.endOf(value, line);
      entries.push({ key, value });
    }
    this.deeperIs(indent);
    return { type: "map", at: this.span(from, to), entries };
  }

  private list(indent: number, depth: number): ListNode {
    const items: Tree[] = [];
    const { from } = this.lines[this.next];
    let to = from;
    for (let line = this.lines[this.next]; line && line.indent === indent; line = this.lines[this.next]) {
      if (!this.text.startsWith("- ", line.from)) break; // the list ends where its key's siblings go on
      let start = line.from + 2;
      while (this.text[start] === " ") start++;
      keyPattern.lastIndex = start;
      if (start >= line.to || this.text[start] === "-") return refuse();
      if (keyPattern.test(this.text)) {
        // `- at: product`: a map that begins on the line of its dash.
        const own = line.indent + start - line.from;
        this.lines[this.next] = { ...line, indent: own, from: start };
        const item = this.map(own, depth + 1);
        to = item.at.to;
        items.push(item);
        continue;
      }
      this.next++;
      const item = this.inline(start, line.to, depth);
      to = this.endOf(item, line);
      items.push(item);
    }
    this.deeperIs(indent);
    return { type: "list", at: this.span(from, to), items };
  }

  /** Maps and lists by indent reach to the end of their last line. */
  private endOf(value: Tree, line: Line): number {
    return value.at.to > line.to ? value.at.to : line.end;
  }

  /** Behind a text of one line no line may stand deeper: that would go on with it. */
  private deeperIs(indent: number): void {
    const line = this.lines[this.next];
    if (line && line.indent > indent) refuse();
  }

  /** What stands behind a key: on its line, or on lines that stand deeper. */
  private value(line: Line, from: number, indent: number, depth: number): Tree {
    let start = from;
    while (start < line.to && this.text[start] === " ") start++;
    if (line.folded) {
      const { text, from: at, to } = line.folded;
      if (start !== at) return refuse();
      return { type: "scalar", at: this.span(at, to), text, plain: false, empty: false };
    }
    if (start < line.to) return this.inline(start, line.to, depth);
    const below = this.lines[this.next];
    if (below && below.indent > indent) return this.block(below.indent, depth + 1);
    if (below && below.indent === indent && this.text.startsWith("- ", below.from)) return this.list(indent, depth + 1);
    return refuse(); // nothing: where that stands is a fine point
  }

  /** A value that is all of the rest of a line. */
  private inline(from: number, to: number, depth: number): Tree {
    const sign = this.text[from];
    if (sign === "{" || sign === "[") {
      const flow = this.flow(from, to, depth + 1);
      return flow.at.to === to ? flow : refuse();
    }
    if (sign === '"' || sign === "'") {
      const quoted = this.quoted(from, to);
      return quoted.at.to === to ? quoted : refuse();
    }
    const text = this.text.slice(from, to);
    if (!startsPlain(this.text, from) || /: |:$/.test(text)) return refuse();
    return this.scalar(from, to);
  }

  /** Braces or brackets, closed before `to`. */
  private flow(from: number, to: number, depth: number): MapNode | ListNode {
    if (depth > deepest) refuse();
    const isMap = this.text[from] === "{";
    const close = isMap ? "}" : "]";
    const entries: Entry[] = [];
    const items: Tree[] = [];
    const seen = new Set<string>();
    let i = this.blanks(from + 1, to);
    while (this.text[i] !== close) {
      let key: ScalarNode | undefined;
      if (isMap) {
        keyInBraces.lastIndex = i;
        const name = keyInBraces.exec(this.text)?.[0];
        if (name === undefined || seen.has(name)) return refuse();
        seen.add(name);
        key = this.scalar(i, i + name.length);
        i = this.blanks(i + name.length + 1, to);
      }
      const value = this.inFlow(i, to, depth);
      if (key) entries.push({ key, value });
      else items.push(value);
      i = this.blanks(value.at.to, to);
      if (this.text[i] === ",") {
        i = this.blanks(i + 1, to);
        if (this.text[i] === close) return refuse();
      } else if (this.text[i] !== close) return refuse();
      if (i >= to) return refuse();
    }
    if (i >= to) return refuse();
    const at = this.span(from, i + 1);
    return isMap ? { type: "map", at, entries } : { type: "list", at, items };
  }

  private inFlow(from: number, to: number, depth: number): Tree {
    const sign = this.text[from];
    if (sign === "{" || sign === "[") return this.flow(from, to, depth + 1);
    if (sign === '"' || sign === "'") return this.quoted(from, to);
    if (!startsPlain(this.text, from)) return refuse();
    let i = from;
    while (i < to && !",[]{}".includes(this.text[i])) i++;
    while (this.text[i - 1] === " ") i--;
    const text = this.text.slice(from, i);
    // A colon before a blank or at the end makes a key.
    if (i <= from || text.includes(": ") || text.endsWith(":")) return refuse();
    return this.scalar(from, i);
  }

  /** A text in quotes, without any sign that means another. */
  private quoted(from: number, to: number): ScalarNode {
    const mark = this.text[from];
    const end = this.text.indexOf(mark, from + 1);
    if (end < 0 || end >= to) return refuse();
    const text = this.text.slice(from + 1, end);
    if (text.includes("\\") || (mark === "'" && this.text[end + 1] === "'")) return refuse();
    return { type: "scalar", at: this.span(from, end + 1), text, plain: false, empty: false };
  }

  private blanks(from: number, to: number): number {
    let i = from;
    while (i < to && this.text[i] === " ") i++;
    return i;
  }

  private scalar(from: number, to: number): ScalarNode {
    const text = this.text.slice(from, to);
    const empty = text === "null" || text === "Null" || text === "NULL";
    return { type: "scalar", at: this.span(from, to), text, plain: true, empty };
  }

  private span = (from: number, to: number): Span => ({ source: this.source, from, to });
}

function startsPlain(text: string, at: number): boolean {
  plainStart.lastIndex = at;
  return plainStart.test(text);
}

/** Where a comment begins on a line; -1 where there is none. `first` is the first sign of one from there on. */
function commentIn(text: string, from: number, end: number, first: number): number {
  if (first >= end) return -1;
  // With quotes before it, where it begins is not told by a glance.
  for (let i = from; i < first; i++) if (text[i] === '"' || text[i] === "'") refuse();
  return first;
}
