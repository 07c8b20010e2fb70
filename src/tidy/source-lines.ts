/** Offset of the first character of the line that an offset lies in. */
export const lineStartOf = (text: string, offset: number): number => text.lastIndexOf("\n", offset - 1) + 1;

/** Column of an offset, from 0. */
export const columnOf = (text: string, offset: number): number => offset - lineStartOf(text, offset);

/** Spaces at the beginning of the line that an offset lies in. */
export const indentAt = (text: string, offset: number): number =>
  text.slice(lineStartOf(text, offset)).search(/[^ ]|$/);

/** True where nothing but space and list dashes stands before an offset on its line. */
export const startsLine = (text: string, offset: number): boolean =>
  /^[\s-]*$/.test(text.slice(lineStartOf(text, offset), offset));

/** True where an offset begins a line, and the line before it is empty. */
export function startsLineAfterBlank(text: string, offset: number): boolean {
  const start = lineStartOf(text, offset);
  if (start === 0 || !startsLine(text, offset)) return false;
  return text.slice(lineStartOf(text, start - 1), start).trim() === "";
}
