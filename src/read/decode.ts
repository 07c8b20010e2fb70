/**
 * The text of a file as plants and instruments write it: UTF-8 or UTF-16 by its byte-order mark, UTF-8 without one,
 * and Windows-1252 where the bytes are no UTF-8 (older loggers' `°C` and `µS`). The byte-order mark is left out.
 */
export function decodeText(content: string | Uint8Array): string {
  if (typeof content === "string") return content.replace(/^\uFEFF/, "");
  const [a, b] = [content[0], content[1]];
  if (a === 0xff && b === 0xfe) return new TextDecoder("utf-16le").decode(content);
  if (a === 0xfe && b === 0xff) return new TextDecoder("utf-16be").decode(content);
  try {
    return new TextDecoder("utf-8", { fatal: true }).decode(content);
  } catch {
    return new TextDecoder("windows-1252").decode(content);
  }
}
