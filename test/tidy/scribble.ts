import { child, type MapNode, type Tree } from "../../src/read/tree.js";

/** Numbers from 0 to 1 from a seed (mulberry32). */
export function seeded(seed: number): () => number {
  let a = seed >>> 0;
  return () => {
    a = (a + 0x6d2b79f5) >>> 0;
    let t = Math.imul(a ^ (a >>> 15), a | 1);
    t ^= t + Math.imul(t ^ (t >>> 7), t | 61);
    return ((t ^ (t >>> 14)) >>> 0) / 4294967296;
  };
}

/**
 * A document as a careless author might have typed it: records in any order, any indent, braces or lines, comments and
 * empty lines anywhere. What it says is what the tree says. Comments are numbered, `comments` counts them.
 */
export function scribble(tree: MapNode, random: () => number): { text: string; comments: number } {
  let comments = 0;
  const chance = (p: number): boolean => random() < p;
  const note = (): string => `# note ${comments++}`;
  const end = (): string => (chance(0.15) ? `${" ".repeat(1 + Math.floor(random() * 6))}${note()}` : "");
  const gap = (pad: string): string[] => [...(chance(0.15) ? [""] : []), ...(chance(0.12) ? [pad + note()] : [])];
  const scalar = (text: string): string => {
    if (text.includes("\n")) return JSON.stringify(text);
    const bare = /^[\w][\w .+*/%-]*$/.test(text) && !/ #|: /.test(text);
    return bare && (chance(0.85) || /^\d+$/.test(text)) ? text : `'${text.replace(/'/g, "''")}'`;
  };

  /** In braces; over several lines and with comments where `pad` is given. */
  const flow = (node: Tree, pad?: string): string => {
    if (node.type === "scalar") return node.empty ? "null" : scalar(node.text);
    const parts =
      node.type === "list"
        ? node.items.map((i) => flow(i))
        : shuffled(node).map((e) => `${e.key.text}: ${flow(e.value)}`);
    const [open, close] = node.type === "list" ? "[]" : "{}";
    if (pad === undefined || parts.length === 0) return `${open}${chance(0.3) ? " " : ""}${parts.join(", ")}${close}`;
    return `${open}${parts.map((p, i) => `${p}${i < parts.length - 1 ? "," : ""}${end()}\n${pad}`).join("")}${close}`;
  };

  const lines = (node: Tree, indent: number): string[] => {
    const pad = " ".repeat(indent);
    const deeper = indent + 1 + Math.floor(random() * 4);
    const below = (head: string, value: Tree): string[] => {
      if (value.type === "scalar") {
        if (value.empty) return [`${head} null${end()}`];
        if (chance(0.1)) return [head, `${" ".repeat(deeper)}${scalar(value.text)}${end()}`];
        if (/^[a-z]+( [a-z]+)+$/.test(value.text) && chance(0.2))
          return [`${head} >-${end()}`, ...value.text.split(" ").map((w) => " ".repeat(deeper) + w)];
        return [`${head} ${scalar(value.text)}${end()}`];
      }
      const empty = value.type === "list" ? value.items.length === 0 : value.entries.length === 0;
      if (empty || chance(0.45)) return [`${head} ${flow(value, chance(0.3) ? `${pad}   ` : undefined)}${end()}`];
      return [`${head}${end()}`, ...lines(value, deeper)];
    };
    const out =
      node.type === "list"
        ? node.items.flatMap((item) => [...gap(pad), ...below(`${pad}-`, item)])
        : node.type === "map"
          ? shuffled(node).flatMap((e) => [...gap(pad), ...below(`${pad}${e.key.text}:`, e.value)])
          : [];
    return [...out, ...(chance(0.1) ? [pad + note()] : [])];
  };

  /** Names of an author's own keep their order; only what is surely a record is shuffled. */
  const shuffled = (node: MapNode) => {
    const isRecord =
      node === tree || child(node, "kind") || child(node, "value") || child(node, "flow") || child(node, "at");
    if (!isRecord) return node.entries;
    const [first, ...rest] = node.entries;
    const mixed = [...(node === tree ? rest : node.entries)];
    for (let i = mixed.length - 1; i > 0; i--) {
      const j = Math.floor(random() * (i + 1));
      [mixed[i], mixed[j]] = [mixed[j], mixed[i]];
    }
    return node === tree ? [first, ...mixed] : mixed;
  };

  const text = `${lines(tree, 0).join("\n")}\n`;
  return { text, comments };
}
