import type { Plant } from "../compile/plant.js";
import { partingsOf } from "../compile/sends.js";
import { isClosed } from "../model/network.js";
import type { Value } from "../model/value.js";
import { holdUp } from "../units/basis.js";
import { dimensions } from "../units/dimension.js";
import { formatNumber, formatQuantity } from "../units/format.js";
import { differenceInUnit, inUnit } from "../units/unit.js";
import { type Balance, balancesOf } from "./balances.js";
import { innerFlow, innerVolume } from "./inside.js";
import { linksOf, type Where, type WrittenStream, whereOf, writtenStreams } from "./links.js";
import { keyOf, streamFlow, texExpression, texValueName, throughFlow, volume } from "./tex.js";
import { totals } from "./totals.js";

/** The compiled balances of a plant as a Markdown page with math, for a reviewer: symbols, flows, volumes, one equation per state. */
export function equationsMarkdown(plant: Plant, balances: readonly Balance[] = balancesOf(plant)): string {
  const { network } = plant;
  const write = equation(locator(plant));
  const of = (is: Balance["is"]): Balance[] => balances.filter((b) => b.is === is);
  return [
    `# ${inText(network.title)}`,
    `The balances of \`${network.path}\` as compiled, for one substance that neither reacts nor sticks. \`L12\` is line 12 of that file. $c$ is the concentration at the outflow of a place, $V$ a ${holdUp(network.basis)}, $Q$ a flow (of a place: all that its streams bring, exchange left out)${isClosed(network) ? "." : "; those of the feeds are given."}`,
    ...section("Names", namesTable(plant)),
    ...section("Flows", flowsTable(plant)),
    ...section("Bodies", bodiesTable(plant)),
    ...section(`Balances of the ${counted(of("state").length, "state")}`, ...of("state").map(write)),
    ...section("Plug flow: delays", ...of("delay").map(write)),
    ...section("Bodies with a residence-time curve of their own", ...of("body").map(write)),
    ...section("Meeting streams and outlets", ...of("joint").map(write)),
    ...section("Substances that divide otherwise than the liquid", partingsTable(plant)),
    ...section("Total balances", totals(plant, balances)),
  ].join("\n\n");
}

const section = (title: string, ...parts: readonly string[]): string[] =>
  parts.some((p) => p !== "") ? [`## ${title}`, ...parts] : [];

const counted = (n: number, word: string): string => `${n} ${word}${n === 1 ? "" : "s"}`;

/** Text of the author's own, so that Markdown leaves it alone. */
const inText = (text: string): string => text.replace(/[\r\n]+/g, " ").replace(/([\\`*_[\]<>|$#])/g, "\\$1");

const table = (titles: readonly string[], rows: readonly (readonly string[])[]): string =>
  rows.length === 0
    ? ""
    : [titles, titles.map(() => "---"), ...rows].map((cells) => `| ${cells.join(" | ")} |`).join("\n");

const math = (tex: string): string => `$${tex}$`;
/** Lines of the network's own file without its name. */
const locator =
  ({ network }: Plant) =>
  ({ file, line }: Where): string =>
    file === network.path ? `L${line}` : `\`${file}\` L${line}`;

function namesTable(plant: Plant): string {
  const { network, env } = plant;
  const at = locator(plant);
  const rows = network.names
    .filter((n) => n.role === "constant" || n.role === "parameter")
    .map((n) => {
      const unit = n.value.unit ?? network.units.unitFor(n.value.dimension);
      const sd = n.value.sd?.(env);
      const spread = sd === undefined ? "" : ` ± ${formatNumber(differenceInUnit(sd, unit))}`;
      const value = `${formatNumber(inUnit(env[n.slot], unit), 6)}${spread} ${unit.name}`.trim();
      return [math(texValueName(n.name)), value, n.role, written(n.value), inText(n.about ?? ""), at(whereOf(n.at))];
    });
  return table(["symbol", "value", "what", "as written", "about", "line"], rows);
}

/** The rule that an expression makes; nothing where a number says it all. */
const written = ({ expression }: Value): string =>
  expression.type === "number" ? "" : math(texExpression(expression));

function flowsTable(plant: Plant): string {
  const { network, feeds, outlets } = plant;
  const at = locator(plant);
  const unit = network.units.unitFor(dimensions.flow);
  const streams = writtenStreams(plant);
  const inside = linksOf(plant).filter((l) => l.says.startsWith("inside "));
  const say = (q: number): string => formatQuantity(q, unit, 6);
  const arriving = (place: string): string =>
    streams
      .filter((s) => "stream" in s.is && s.to === place)
      .map((s) => streamFlow(s.leaves, s.enters))
      .join(" + ");
  const through = (place: string): number =>
    streams.reduce((sum, s) => sum + ("stream" in s.is && s.to === place ? s.flow : 0), 0);
  return table(
    ["flow", "value", "line"],
    [
      ...network.feeds.map((f, i) => [
        math(`${throughFlow(f.name)} = ${texExpression(f.flow.expression)}`),
        say(feeds[i].flow),
        at(whereOf(f.flow.at)),
      ]),
      ...repeatInlets(plant).map((n) => [
        math(`${throughFlow(n.name)} = ${throughFlow(n.first)}`),
        say(n.flow),
        at(whereOf(n.at)),
      ]),
      ...network.compartments.flatMap((c) =>
        arriving(c.name) === ""
          ? []
          : [[math(`${throughFlow(c.name)} = ${arriving(c.name)}`), say(through(c.name)), at(whereOf(c.at))]],
      ),
      ...streams.map((s) => [math(streamRule(s, streams)), say(s.flow), at(s)]),
      ...inside.map((l) => [math(innerFlow(plant, l)), say(l.flow), at(l)]),
      ...network.outlets.map((o, i) => [
        math(`${throughFlow(o.name)} = ${arriving(o.name)}`),
        say(outlets[i].flow),
        at(whereOf(o.at)),
      ]),
    ],
  );
}

/** Flows into parts with repeats that values use: all repeats have what enters the first. */
function repeatInlets({ network: { names, groups, compartments }, env }: Plant) {
  const bodies = new Set(compartments.map((c) => c.name));
  return names.flatMap(({ name: full, role, slot, at }) => {
    const name = full.replace(/\.flow$/, "");
    if (role !== "inflow" || bodies.has(name)) return [];
    const group = groups.find((g) => name.startsWith(`${g.name}.`) && g.inlets.some((i) => portOf(i) === portOf(name)));
    const first = group?.inlets.find((i) => portOf(i) === portOf(name));
    return first === undefined ? [] : [{ name, first, flow: env[slot], at }];
  });
}

const portOf = (place: string): string => place.slice(place.lastIndexOf(".") + 1);

/** How much a stream carries, as the file decides it. */
function streamRule({ from, leaves, enters, is }: WrittenStream, all: readonly WrittenStream[]): string {
  if ("exchange" in is) return `${streamFlow(leaves, enters, true)} = ${texExpression(is.exchange.flow.expression)}`;
  const { split } = is.stream;
  const left = streamFlow(leaves, enters);
  if (split.is === "all") return `${left} = ${throughFlow(from)}`;
  if (split.is === "flow") return `${left} = ${texExpression(split.value.expression)}`;
  if (split.is === "share") {
    const share = texExpression(split.value.expression);
    return `${left} = ${split.value.expression.type === "binary" ? `\\left(${share}\\right)` : share}\\, ${throughFlow(from)}`;
  }
  const others = all.filter((o) => o.from === from && "stream" in o.is && o.is.stream !== is.stream);
  return `${left} = ${[throughFlow(from), ...others.map((o) => streamFlow(o.leaves, o.enters))].join(" - ")}`;
}

function bodiesTable(plant: Plant): string {
  const { network, env, nodes, volume: total } = plant;
  const at = locator(plant);
  const unit = network.units.unitFor(dimensions.volume);
  const say = (v: number): string => formatQuantity(v, unit, 6);
  const bodies = network.compartments.flatMap((c) => [
    ...Object.entries(c.values).map(([key, v]) => {
      const left = key === "volume" ? volume(c.name) : keyOf(key, c.name);
      const value = formatQuantity(v.of(env), v.unit ?? network.units.unitFor(v.dimension), 6);
      return [math(`${left} = ${texExpression(v.expression)}`), value, c.kind.name, at(whereOf(v.at))];
    }),
    ...nodes
      .filter((n) => n.name.startsWith(`${c.name}.`) && n.volume > 0)
      .map((n) => [
        math(innerVolume(plant, n)),
        say(n.volume),
        `part of ${inText(c.name)}`,
        at(whereOf(c.zones?.at?.volumes ?? c.at)),
      ]),
  ]);
  const whole = [math("V"), say(total.total), total.dead > 0 ? `${say(total.dead)} of it dead` : "all", ""];
  return table(["symbol", "value", "kind", "line"], [...bodies, whole]);
}

/** The flows that carry a substance in place of those of the liquid, where `sends` divides it. */
function partingsTable(plant: Plant): string {
  const at = locator(plant);
  const place = (name: string) => plant.network.compartments.find((c) => c.name === name) ?? plant.network;
  const rows = partingsOf(plant).map(({ of, from, to, share }) => [
    inText(of),
    math(`${streamFlow(from, to)} \\mapsto ${formatNumber(share, 6)}\\, ${throughFlow(from)}`),
    at(whereOf(place(from).at)),
  ]);
  return rows.length === 0
    ? ""
    : `For these, what leaves a place by a stream is this flow times the concentration there; in all balances above it stands for the liquid's.\n\n${table(["substance", "flow", "line"], rows)}`;
}

const equation =
  (at: (where: Where) => string) =>
  (balance: Balance): string => {
    const { name, tex, terms, also = [] } = balance;
    const rows = terms.map((t) => [math(t.tex), inText(t.says), at(t)]);
    return `**${inText(name)}** (${at(balance)})\n\n${[tex, ...also].map((t) => `$$${t}$$`).join("\n\n")}\n\n${table(["term", "from", "line"], rows)}`;
  };
