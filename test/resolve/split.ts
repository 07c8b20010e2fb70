import type { Library } from "./parts.js";

/** One line of `compartments:` of a random network, taken apart. */
interface Line {
  readonly name: string;
  /** What stands before `to:` and after it. */
  readonly before: string;
  readonly to: readonly (readonly [target: string, amount: string])[];
  readonly after: string;
}

const lineOf = (text: string): Line => {
  const [, name, before, to = "", after = ""] = /^ {2}(\w+): \{(.*?)(?:, to: (\{[^}]*\}|\w+)(.*))?\}$/.exec(text) ?? [];
  const branches = to.startsWith("{")
    ? to
        .slice(1, -1)
        .split(", ")
        .map((b): [string, string] => b.split(": ") as [string, string])
    : to === ""
      ? []
      : [[to, "all"] as [string, string]];
  return { name, before, to: branches, after };
};

const text = ({ name, before, to, after }: Line): string => {
  const branches =
    to.length === 1 && to[0][1] === "all"
      ? to[0][0]
      : `{${to.map(([target, amount]) => `${target}: ${amount}`).join(", ")}}`;
  return `  ${name}: {${before}${to.length > 0 ? `, to: ${branches}` : ""}${after}}`;
};

/**
 * A random network with some of its bodies moved into a part of its own, what flows in and out of it by a port for each
 * place that it goes to.
 * @param inside is a body of the chain (`n3`) moved? Its corner goes with it.
 */
export function splitOff(network: string, inside: (name: string) => boolean): Library {
  const [head, tail] = network.split("compartments:\n");
  const end = tail.indexOf("outlets:");
  const lines = tail.slice(0, end).trimEnd().split("\n").map(lineOf);
  const moved = new Set(lines.map((l) => l.name).filter((name) => inside(name.replace("s", "n"))));
  const inlets = new Set<string>();
  const outlets = new Set<string>();
  const into = (target: string): string => {
    if (!moved.has(target)) return target;
    inlets.add(target);
    return `core.to-${target}`;
  };
  const out = (target: string): string => {
    if (moved.has(target)) return target;
    outlets.add(target);
    return `from-${target}`;
  };
  const aimed = (line: Line, aim: (target: string) => string): Line => ({
    ...line,
    to: line.to.map(([target, amount]) => [aim(target), amount]),
  });
  const parent = lines.filter((l) => !moved.has(l.name)).map((l) => text(aimed(l, into)));
  const part = lines.filter((l) => moved.has(l.name)).map((l) => text(aimed(l, out)));
  const feeds = head.replace(/to: \{([^}]*)\}/, (_, branches: string) => `to: {${branches.replace(/\bn\d\b/g, into)}}`);
  // What leads straight back into the part is a stream of the parent's, too.
  const ways = [...outlets].map((target) => `from-${target}: ${into(target)}`).join(", ");
  return {
    "main.yaml": `${feeds}compartments:\n${parent.join("\n")}\n  core: {kind: part, use: core.yaml, to: {${ways}}}\n${tail.slice(end)}`,
    "core.yaml": [
      "network: Core",
      "format: 1",
      "feeds:",
      ...[...inlets].map((target) => `  to-${target}: {flow: 1 L/min, to: ${target}}`),
      "compartments:",
      ...part,
      `outlets: [${[...outlets].map((target) => `from-${target}`).join(", ")}]`,
      "",
    ].join("\n"),
  };
}
