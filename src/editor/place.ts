/** Where a cursor stands in a document that may be broken: what an editor asks about while it is typed. */
export interface Place {
  /** Keys from the document to the map that the cursor is in, or to the key whose value it is in; lists have no step of their own. */
  readonly path: readonly string[];
  /** Is it where a key stands or would be typed? */
  readonly onKey: boolean;
  /** The word under the cursor, and where it begins and ends in the text. */
  readonly word: string;
  readonly from: number;
  readonly to: number;
  /** What of the word stands before the cursor. */
  readonly typed: string;
}

interface Level {
  readonly indent: number;
  readonly key: string;
}

/** A `{` or `[` that is open, and the key whose value comes. */
interface Open {
  readonly is: "{" | "[";
  key: string | undefined;
}

const keyLine = /^(\s*(?:- +)*)("[^"]*"|'[^']*'|[^\s#{}[\],:"'-][^\s#{}[\],:]*):(?=\s|$)/;

/** Finds the place at an offset by indentation and brackets alone: it need not be YAML yet. */
export function placeAt(text: string, offset: number): Place {
  let from = offset;
  while (from > 0 && isWord(text[from - 1])) from--;
  let to = offset;
  while (to < text.length && isWord(text[to])) to++;
  const word = text.slice(from, to);
  const typed = text.slice(from, offset);
  const levels: Level[] = [];
  const open: Open[] = [];
  const before = text.slice(0, from).split("\n");
  for (const [k, line] of before.entries()) {
    if (open.length > 0) {
      scan(line, open);
      continue;
    }
    const last = k === before.length - 1;
    const lead = /^\s*(?:- +)*/.exec(line)?.[0].length ?? 0;
    const outer = /^\s*/.exec(line)?.[0].length ?? 0;
    const blank = /^\s*(#|$)/.test(line);
    if (blank && !last) continue;
    while (levels.length > 0 && levels[levels.length - 1].indent >= outer) levels.pop();
    const key = keyLine.exec(line);
    if (key) levels.push({ indent: lead, key: unquoted(key[2]) });
    else if (last && open.length === 0 && line.slice(lead).trim() === "") break;
    scan(line.slice(key ? key[0].length : lead), open);
    if (last && open.length === 0) return { path: levels.map((l) => l.key), onKey: false, word, from, to, typed };
  }
  const inner = open[open.length - 1];
  const path = [...levels.map((l) => l.key), ...open.flatMap((o) => (o.key === undefined ? [] : [o.key]))];
  return { path, onKey: inner ? inner.is === "{" && inner.key === undefined : true, word, from, to, typed };
}

/** Follows brackets, keys and commas of a flow collection. */
function scan(line: string, open: Open[]): void {
  const token = /"(?:[^"\\]|\\.)*"|'[^']*'|#.*$|[{}[\],]|:(?=\s|$)|[^\s{}[\],:"']+|:|\s+/g;
  let before = "";
  let blank = true;
  for (const [part] of line.matchAll(token)) {
    const inner = open[open.length - 1];
    if (part === "{" || part === "[") open.push({ is: part, key: undefined });
    else if (part === "}" || part === "]") open.pop();
    else if (part === ",") {
      if (inner) inner.key = undefined;
    } else if (part === ":" && inner?.is === "{" && inner.key === undefined) inner.key = unquoted(before);
    else if (part.startsWith("#") && blank) return;
    blank = /^\s/.test(part);
    if (!blank) before = part;
  }
}

const isWord = (c: string): boolean => /[\w.-]/.test(c);

const unquoted = (key: string): string => key.replace(/^(["'])(.*)\1$/, "$2");
