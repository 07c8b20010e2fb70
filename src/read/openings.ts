/** A bracket or quote that nothing closes, by its offset. */
export interface Opening {
  readonly at: number;
  readonly opener: string;
  readonly closing: string;
}

const closers: Record<string, string> = { "{": "}", "[": "]" };

/**
 * The innermost bracket or quote that is still open at the end of the text, or where a new key begins outside it at a lower indent.
 * Rough where YAML is intricate (block scalars): it only helps to word a fault that the parser found.
 */
export function firstUnclosed(text: string): Opening | undefined {
  const open: Opening[] = [];
  let fresh = true; // may a quote or a bracket begin a value here?
  for (let i = 0; i < text.length; i++) {
    const c = text[i];
    if (c === "#" && (i === 0 || /\s/.test(text[i - 1]))) {
      i = lineEnd(text, i) - 1;
      continue;
    }
    if (c === "\n" && open.length > 0 && /^[A-Za-z][\w-]*:(\s|$)/.test(text.slice(i + 1, i + 80))) return open[0];
    if (fresh && (c === '"' || c === "'")) {
      const end = quoteEnd(text, i);
      if (end < 0) return { at: i, opener: c, closing: c };
      i = end;
      fresh = false;
    } else if (c in closers && (fresh || open.length > 0)) {
      open.push({ at: i, opener: c, closing: closers[c] });
      fresh = true;
    } else if (c === open.at(-1)?.closing) {
      open.pop();
      fresh = false;
    } else if (!/\s/.test(c)) {
      fresh = (c === "," && open.length > 0) || (/[:-]/.test(c) && /\s/.test(text[i + 1] ?? " "));
    } else if (c === "\n") fresh = true;
  }
  return open.at(-1);
}

function quoteEnd(text: string, from: number): number {
  const quote = text[from];
  for (let i = from + 1; i < text.length; i++) {
    if (quote === '"' && text[i] === "\\") i++;
    else if (text[i] === quote && quote === "'" && text[i + 1] === "'") i++;
    else if (text[i] === quote) return i;
  }
  return -1;
}

function lineEnd(text: string, from: number): number {
  const end = text.indexOf("\n", from);
  return end < 0 ? text.length : end;
}
