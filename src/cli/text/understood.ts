import type { Chemistry } from "../../model/chemistry.js";
import type { Duty, FeedCourse } from "../../model/duty.js";
import type { ChangeDocument, Study } from "../../model/study.js";
import { type Injection, type Reading, readingLabel, type Trial } from "../../model/trial.js";
import type { Value } from "../../model/value.js";
import type { AnyDocument } from "../../parse/any.js";
import { showTime } from "../../read/series.js";
import type { Span } from "../../text/source.js";
import { dimensions } from "../../units/dimension.js";
import { formatQuantity } from "../../units/format.js";
import type { Unit } from "../../units/unit.js";
import { blocks, pairs, table } from "./table.js";

const minute: Unit = { name: "min", factor: 60, offset: 0, dimension: dimensions.time };

type Row = readonly [string, string];

/** What was understood of a sound document, for people; of a network its balance says that. */
export function understoodText({ document }: Pick<AnyDocument, "document">): string {
  if (!document) return "";
  if (document.is === "trial") return trialText(document.document);
  if (document.is === "duty") return dutyText(document.document);
  if (document.is === "chemistry") return chemistryText(document.document);
  return document.is === "study" ? studyText(document.document) : changeText(document.document);
}

function trialText(trial: Trial): string {
  const when = (s: number, r?: Reading): string =>
    showTime(s, trial.clock, trial.clock ? undefined : (r?.series?.timeUnit ?? firstTimeUnit(trial)));
  return blocks(
    pairs([
      ...(trial.vessel === undefined ? [] : [["vessel", fileOf(trial.vessel)] as Row]),
      ...named("flow", trial.flows),
      ...[...(trial.flowLogs ?? [])].map(([feed, s]): Row => [`flow of ${feed}`, `logged in ${fileOf(s.file)}`]),
      ...named("with", trial.with),
      ...trial.injections.map((i): Row => ["injection", injectionWords(i, when)]),
      ...(trial.contents?.levels ?? []).map((l): Row => ["at the start", `${l.of} holds ${written(l.level)}`]),
      ...(trial.reacting ? reactingRows(trial.reacting) : []),
      ...tracerRows(trial),
      [
        "clock",
        trial.clock
          ? `times of day, written ${trial.clock.text}`
          : `elapsed, in ${firstTimeUnit(trial)?.name ?? "units that each time names"}`,
      ],
    ]),
    readingsTable(trial.readings, when),
  );
}

function injectionWords({ at, start, lasting, form }: Injection, when: (s: number) => string): string {
  const over = lasting > 0 ? ` over ${formatQuantity(lasting, minute)}` : "";
  if (form.is === "pulse")
    return `pulse of ${written(form.amount)} at ${at}, from ${when(start)}${over || ", at once"}`;
  if (form.is === "signal")
    return `measured inlet at ${at}, ${fileOf(form.table.file)}, ${form.table.time.length} rows`;
  const from = form.from ? ` from ${written(form.from)}` : "";
  return `step${from} to ${written(form.level)} at ${at}, ${when(start)}${over}`;
}

function reactingRows({ chemistry, temperature, feeds, contents }: NonNullable<Trial["reacting"]>): Row[] {
  return [
    ["chemistry", chemistry.title],
    ...(temperature ? [["temperature", written(temperature)] as Row] : []),
    ...[...feeds].map(([feed, f]): Row => [`fed by ${feed}`, speciesWords(f.species)]),
    ...[...contents].map(([place, f]): Row => [`${place} holds`, speciesWords(f.species)]),
  ];
}

function tracerRows({ tracer }: Trial): Row[] {
  if (!tracer) return [];
  const rate = (what: string, perSecond: number | undefined): string[] =>
    perSecond === undefined ? [] : [`${what} with a half-life of ${formatQuantity(Math.LN2 / perSecond, minute)}`];
  return [
    [
      "tracer",
      [
        ...(tracer.follows ? [`goes as ${tracer.follows.of} does`] : []),
        ...rate("decays", tracer.decay),
        ...rate("is lost", tracer.loss),
        ...(tracer.retained ?? []).map(
          ({ body, factor }) => `is held back in ${body} (${typeof factor === "number" ? factor : factor.name} times)`,
        ),
      ].join("; "),
    ],
  ];
}

function readingsTable(readings: readonly Reading[], when: (s: number, r: Reading) => string): string {
  if (readings.length === 0) return "";
  const rows = readings.map((r) => {
    const { series: s } = r;
    const last = s ? s.time.length - 1 : -1;
    const out = s ? [...s.time].filter((t) => r.leaveOut.some((l) => t >= l.from && t <= l.to)).length : 0;
    return [
      readingLabel(r),
      r.of?.steady ? "one steady analysis" : s ? fileOf(s.file) : "no file yet: a draft",
      s && !r.of?.steady ? String(s.time.length) : "",
      s && last >= 0 && !r.of?.steady ? `${when(s.time[0], r)} to ${when(s.time[last], r)}` : "",
      s ? (s.valueUnit.name === r.unit.name ? r.unit.name : `${s.valueUnit.name} -> ${r.unit.name}`) : r.unit.name,
      [
        ...(r.baseline === "none" ? [] : [`${r.baseline === "drift" ? "drifting" : "constant"} baseline`]),
        ...(r.scale === "free" ? ["free scale"] : []),
        ...(r.line.delay ? [`delay ${written(r.line.delay)}`] : []),
        ...(r.line.lag ? [`lag ${written(r.line.lag)}`] : []),
        ...(s && s.missing > 0 ? [`${s.missing} missing`] : []),
        ...(out > 0 ? [`${out} left out`] : []),
      ].join(", "),
    ];
  });
  const titles = ["reading", "file", "rows", "times", "unit", "cleaning"];
  return table(
    titles.map((title) => ({ title, align: title === "rows" ? "right" : "left" })),
    rows,
  );
}

function dutyText(duty: Duty): string {
  const { heat } = duty;
  return pairs([
    ["chemistry", duty.chemistry?.title ?? "none: mixing alone"],
    ...[...duty.flows].map(([feed, f]): Row => ["flow", `${feed} ${inTime(f.value, duty.flowCourses?.get(feed))}`]),
    ...[...duty.feeds].map(([feed, f]): Row => {
      const warm = f.temperature ? `, at ${inTime(f.temperature, f.courses?.get("temperature"))}` : "";
      const brings = [...f.species].map(([name, p]) => `${name} ${inTime(p.value, f.courses?.get(name))}`).join(", ");
      return [`fed by ${feed}`, (brings || "nothing that reacts") + warm];
    }),
    ...named("with", placed(new Map([...duty.with, ...duty.settings]))),
    ...[...(duty.local ?? [])].map(
      ([place, l]): Row => [
        `only in ${place}`,
        [...l.constants].map(([k, v]) => `${k} ${written(v.value)}`).join(", "),
      ],
    ),
    ...(duty.temperature ? [["temperature", `${written(duty.temperature)}, everywhere`] as Row] : []),
    ...(heat
      ? [
          [
            "heat",
            [
              ...[...heat.jackets].map(
                ([b, j]) => `${b} has a jacket at ${written(j.temperature)}, ${written(j.conductance)}`,
              ),
              ...heat.exchangers.map((x) => `${x.outlet} warms ${x.feed} (${x.size.is} ${written(x.size.value)})`),
              heat.jackets.size > 0 ? "all else adiabatic" : "adiabatic",
            ].join("; "),
          ] as Row,
        ]
      : []),
    ...[...(duty.contents?.levels ?? [])].map(([place, f]): Row => [`${place} holds first`, speciesWords(f.species)]),
    ["reported", duty.report.length > 0 ? duty.report.map((r) => r.text).join("; ") : "nothing but the outlets"],
    ...(duty.regulated ? [["regulated", `contact time at ${duty.regulated.outlet}`] as Row] : []),
  ]);
}

function chemistryText(c: Chemistry): string {
  const names = [...c.species.map((s) => s.name), ...c.constants.map((k) => k.name), "T"];
  return blocks(
    pairs([
      ["species", c.species.map((s) => s.name).join(", ")],
      ...c.constants.map(
        (k): Row => [
          k.free ? "parameter" : "constant",
          `${k.name} = ${written(k.value)}${k.warmed ? ", follows T" : ""}`,
        ],
      ),
      ...(c.heatCapacity ? [["heat capacity", written(c.heatCapacity)] as Row] : []),
      ["temperature", c.needsTemperature ? "asked for by the rates" : "no rate follows it"],
    ]),
    table(
      ["reaction", "makes of each", ...(c.reactions.some((r) => r.heat) ? ["heat"] : [])].map((title) => ({ title })),
      c.reactions.map((r) => [
        r.text,
        r.makes.map((m) => `${names[m.species]} ${signed(m.number(new Float64Array(names.length)))}`).join(", "),
        r.heat ? written(r.heat) : "",
      ]),
    ),
  );
}

const signed = (x: number): string => (Number.isFinite(x) ? `${x < 0 ? "\u2212" : "+"}${Math.abs(x)}` : "by constants");

function studyText(s: Study): string {
  const list = (what: string, items: readonly { readonly title: string; readonly path: string }[]): Row[] =>
    items.map((d, k): Row => [k === 0 ? what : "", `${fileOf(d.path)}: ${d.title}`]);
  return pairs([
    ...list(
      "rivals",
      s.rivals.map((r) => ({ title: r.network.title, path: r.path })),
    ),
    ...list("trials", s.trials),
    ...list("duties", s.duties),
    ...list("changes", s.changes),
    ...s.sweeps.map((w): Row => ["sweep", `${w.duty.title} over ${w.over.map((o) => o.name).join(" and ")}`]),
    ...s.aims.map((a): Row => ["aim", `${a.aim.text} by ${a.by.name}: ${a.duty.title}`]),
    ["seed", String(s.seed)],
    ...(s.out === undefined ? [] : [["out", s.out] as Row]),
  ]);
}

const changeText = (c: ChangeDocument): string =>
  pairs([["changes", c.change.entries.map(({ key }) => key.text).join(", ")]]);

const named = (what: string, values: ReadonlyMap<string, Value>): Row[] =>
  [...values].map(([name, v]): Row => [what, `${name} ${written(v)}`]);

const placed = (values: ReadonlyMap<string, { readonly value: Value }>): ReadonlyMap<string, Value> =>
  new Map([...values].map(([name, p]) => [name, p.value]));

const speciesWords = (species: ReadonlyMap<string, { readonly value: Value }>): string =>
  [...species].map(([name, p]) => `${name} ${written(p.value)}`).join(", ");

/** A value of a feed, and in brackets what it goes to. */
function inTime(before: Value, course: FeedCourse | undefined): string {
  if (!course) return written(before);
  const time = (s: number): string => formatQuantity(s, minute);
  if (course.is === "upset") {
    const { start, lasting, to } = course;
    const until = lasting === undefined ? " on" : ` to ${time(start + lasting)}`;
    return `${written(before)} (${written(to)} from ${time(start)}${until})`;
  }
  const { times, values } = course;
  const say = (x: number): string => (before.unit ? formatQuantity(x, before.unit) : String(x));
  const last = times.length - 1;
  return `${say(values[0])} (logged, ${times.length} rows to ${say(values[last])} at ${time(times[last])})`;
}

const firstTimeUnit = (trial: Trial) => trial.readings.find((r) => r.series)?.series?.timeUnit;

/** A value as the file has it, with its ±. */
const written = ({ at }: Value): string => textAt(at);

const textAt = ({ source, from, to }: Span): string => source.text.slice(from, to).replace(/\s+/g, " ");

const fileOf = (path: string): string => path.split("/").at(-1) ?? path;
