import { type Bytes, byteMutations } from "./bytes.js";
import { type Random, randomOf } from "./random.js";
import { restructured } from "./structure.js";
import { tokenMutations } from "./tokens.js";

/** One broken file: which, and what it holds now. */
export interface Input {
  readonly path: string;
  readonly bytes: Bytes;
}

const decoder = new TextDecoder();
const encoder = new TextEncoder();

const asText = (bytes: Bytes, change: (text: string) => string): Bytes => encoder.encode(change(decoder.decode(bytes)));

function mutated(bytes: Bytes, random: Random): Bytes {
  const sort = random.below(10);
  if (sort < 2) return random.pick(byteMutations)(bytes, random);
  if (sort < 7) return asText(bytes, (text) => random.pick(tokenMutations)(text, random));
  return asText(bytes, (text) => restructured(text, random));
}

/** The n-th input of a seed: a shipped file with one to four mutations. */
export function inputOf(corpus: ReadonlyMap<string, Bytes>, seed: number, n: number): Input {
  const random = randomOf(seed, n);
  const path = random.pick([...corpus.keys()]);
  let bytes = corpus.get(path) ?? new Uint8Array();
  for (let k = 0; k <= random.below(4); k++) bytes = mutated(bytes, random);
  return { path, bytes };
}
