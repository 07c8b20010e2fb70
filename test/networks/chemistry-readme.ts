import { parse } from "yaml";
import { textOf } from "./chemistries.js";

interface Written {
  readonly chemistry: string;
  readonly notes: string;
  readonly species: Record<string, { about?: string } | null>;
  readonly constants?: Record<string, string | Record<string, string>>;
  readonly reactions: readonly {
    equation?: string;
    makes?: Record<string, unknown>;
    rate: string;
    constant?: unknown;
  }[];
}

/** The page that shows what chemistries there are: what each is, its laws and its constants. Made from the files themselves. */
export function chemistryReadme(names: readonly string[]): string {
  const sections = names.map((name) => {
    const { chemistry, notes, species, constants, reactions } = parse(textOf(name)) as Written;
    return [
      `## ${chemistry}`,
      "",
      `\`${name}.yaml\`: ${notes.replace(/\s+/g, " ").trim()}`,
      "",
      "| reaction | rate |",
      "|---|---|",
      ...reactions.map((r) => `| \`${r.equation ?? flow(r.makes)}\` | \`${rateOf(r)}\` |`),
      "",
      `Species: ${Object.entries(species)
        .map(([s, of]) => `\`${s}\`${of?.about ? ` (${of.about})` : ""}`)
        .join(", ")}.`,
      "",
      "| constant | value | |",
      "|---|---|---|",
      ...Object.entries(constants ?? {}).map(([c, of]) => `| \`${c}\` | ${valueWords(of)} | ${aboutOf(of)} |`),
      "",
    ].join("\n");
  });
  return `${head}\n${sections.join("\n")}`;
}

const flow = (makes: Record<string, unknown> = {}): string =>
  `{${Object.entries(makes)
    .map(([s, n]) => `${s}: ${n}`)
    .join(", ")}}`;

const rateOf = ({ rate, constant }: Written["reactions"][number]): string =>
  constant === undefined ? rate.trim() : `${rate}, ${Array.isArray(constant) ? constant.join(" and ") : constant}`;

function valueWords(of: string | Record<string, string>): string {
  if (typeof of !== "object") return String(of);
  const more = [
    of.at && `at ${of.at}`,
    of.activation && `activation ${of.activation}`,
    of.heat && `heat ${of.heat}`,
  ].filter(Boolean);
  return [of.value, ...more].join(", ");
}

const aboutOf = (of: string | Record<string, string>): string => (typeof of === "object" ? (of.about ?? "") : "");

const head = `# Chemistries

Rate laws to start from. A duty names one, and sets what is known better:

\`\`\`yaml
chemistry: ../shared/chemistry/michaelis-menten.yaml     # relative to your file
with: {most: 0.08 mol/L/min ± 5 %}
\`\`\`

Constants are demo values or from memory, as each says: none is a fact about your liquid. To measure them in a flask, move them from
\`constants:\` to \`parameters:\` in a copy and fit (\`networks/flask\` shows how). Each law is tested against a closed form or what its source says
of it. This page is made from the files.
`;
