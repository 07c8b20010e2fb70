import type { NetworkDocument } from "../../src/parse/network.js";
import type { Span } from "../../src/text/source.js";

/** The page that shows what parts there are: a picture, what it is, what may be bound. Made from the parts themselves. */
export function partsReadme(parts: ReadonlyMap<string, NetworkDocument>): string {
  const sections = [...parts].map(([name, network]) => {
    const { title, notes = "", names } = network;
    const rows = names
      .filter((n) => n.role !== "feed-flow")
      .map((n) => {
        const bounds = n.between?.map(({ at }) => written(at)).join(" to ") ?? "";
        return `| \`${n.name}\` | ${written(n.value.at)} | ${bounds} | ${n.about ?? "volume of the whole"} |`;
      });
    return [
      `## ${title}`,
      "",
      `\`${name}.yaml\`: ${notes.replace(/\s+/g, " ").trim()}`,
      "",
      `![${title}](${name}.svg)`,
      "",
      "| name | value | a fit may try | |",
      "|---|---|---|---|",
      ...rows,
      "",
    ].join("\n");
  });
  return `${head}\n${sections.join("\n")}`;
}

const written = ({ source, from, to }: Span): string => source.text.slice(from, to);

const head = `# Parts

Networks that stand alone and are made to be placed in others. Each keeps its \`checks:\`; try one by itself:

    backmix check shared/parts/quiet-corner.yaml
    backmix simulate shared/parts/quiet-corner.yaml --pulse feed

In a network of your own it is a compartment. What \`with:\` does not bind stays open as \`reactor.corner\`, free to be fitted or
set; flows inside follow what the part is fed.

\`\`\`yaml
  reactor:
    kind: part
    use: ../shared/parts/quiet-corner.yaml      # relative to your file
    with: {total: 2.4 m3, renewal: 4 L/min / reactor.feed.flow}
    to: product
\`\`\`

For another number of cells, or another kind of body inside, write a variant: \`based-on:\` this file, and what is different under
\`change:\`. Values are defaults to start from, not facts about any vessel. This page and its pictures are made from the files.
`;
