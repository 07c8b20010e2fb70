import type { Random } from "./random.js";

export type Bytes = Uint8Array;

const join = (...parts: readonly Bytes[]): Bytes => {
  const all = new Uint8Array(parts.reduce((n, p) => n + p.length, 0));
  let at = 0;
  for (const p of parts) {
    all.set(p, at);
    at += p.length;
  }
  return all;
};

/** A stretch of a file: where, and up to where. */
function stretch(random: Random, of: Bytes, longest: number): [number, number] {
  const from = random.below(of.length + 1);
  return [from, Math.min(of.length, from + 1 + random.below(longest))];
}

/** What a disk, a line or a careless tool does to a file: bits flipped, parts lost, doubled, moved, overwritten. */
export const byteMutations: readonly ((file: Bytes, random: Random) => Bytes)[] = [
  (file, random) => {
    const out = file.slice();
    if (out.length > 0) out[random.below(out.length)] ^= 1 << random.below(8);
    return out;
  },
  (file, random) => {
    const out = file.slice();
    for (let k = 0; k < 1 + random.below(8) && out.length > 0; k++) out[random.below(out.length)] = random.below(256);
    return out;
  },
  (file, random) => file.slice(0, random.below(file.length + 1)),
  (file, random) => {
    const [from, to] = stretch(random, file, 40);
    return join(file.slice(0, from), file.slice(to));
  },
  (file, random) => {
    const [from, to] = stretch(random, file, 200);
    const copies = Array.from({ length: random.pick([1, 2, 50]) }, () => file.slice(from, to));
    return join(file.slice(0, to), ...copies, file.slice(to));
  },
  (file, random) => {
    const [from, to] = stretch(random, file, 80);
    const at = random.below(file.length + 1);
    return join(file.slice(0, at), file.slice(from, to), file.slice(at));
  },
  (file, random) => join(new Uint8Array(random.pick([[0xef, 0xbb, 0xbf], [0xff, 0xfe], [0xfe, 0xff], [0]])), file),
  (file) => join(...[...file].map((b) => new Uint8Array([b, 0]))), // UTF-16 without its mark
];
