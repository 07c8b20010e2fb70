/**
 * False for what is no text for people: NUL characters, the first bytes of a ZIP archive (workbooks are one), or control
 * characters all over its top, as in pictures and packed files. A stray one does not count.
 */
export function isText(text: string): boolean {
  if (text.startsWith("PK\u0003\u0004") || text.includes("\0")) return false;
  const top = Math.min(text.length, 4096);
  let found = 0;
  for (let i = 0; i < top; i++) if (isControl(text.charCodeAt(i))) found++;
  return found < 3 || found * 100 < top;
}

/** What no text holds: neither tabs and line breaks nor the end mark of old editors (Ctrl-Z). */
const isControl = (c: number): boolean => c < 9 || (c > 13 && c < 32 && c !== 26) || c === 127;
