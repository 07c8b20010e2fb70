import { entry } from "../problem.js";

const more = (others: number, what = "row"): string =>
  others === 0 ? "" : ` (and ${others} more ${what}${others === 1 ? "" : "s"})`;

const quoted = (names: readonly string[]): string => {
  const shown = names.slice(0, 6).map((n) => `'${n}'`);
  return `${shown.join(", ")}${names.length > 6 ? ` and ${names.length - 6} more` : ""}`;
};

/** Zoned bodies and their tables. A problem in a table stands at its line of the file. */
export const zoneEntries = {
  "table-too-large": entry({
    severity: "error",
    says: ({ file, megabytes }: { file: string; megabytes: number }) =>
      `'${file}' has ${megabytes} MB; a table may have 500 MB`,
    fix: "take out columns that nothing reads, or join cells that are mixed as one",
    example: { file: "flows.csv", megabytes: 812 },
  }),
  "zone-incomplete": entry({
    severity: "error",
    says: ({ others }: { others: number }) => `a name or a number is missing in this row${more(others)}`,
    fix: "fill it in, or take the row out",
    example: { others: 0 },
  }),
  "zone-not-number": entry({
    severity: "error",
    says: ({ text, others }: { text: string; others: number }) => `'${text}' is no number${more(others)}`,
    fix: "write the number alone, its unit stands in the document; with decimal commas, say so: `csv: {decimal: comma}`",
    example: { text: "ten", others: 0 },
  }),
  "zone-negative": entry({
    severity: "error",
    says: ({ what, value, others }: { what: "volume" | "flow"; value: string; others: number }) =>
      `the ${what} is ${value}${more(others)}`,
    fix: ({ what }) =>
      what === "flow"
        ? "a flow cannot be below zero: write the row the other way round"
        : "a volume cannot be below zero",
    example: { what: "volume", value: "-0.2", others: 3 },
  }),
  "zone-twice": entry({
    severity: "error",
    says: ({ name, others }: { name: string; others: number }) =>
      `the cell '${name}' stands in two rows${more(others)}`,
    fix: "a cell has one row: take one out, or give the cells different names",
    example: { name: "c17", others: 0 },
  }),
  "zone-row-twice": entry({
    severity: "error",
    says: ({ from, to, others }: { from: string; to: string; others: number }) =>
      `the flow from '${from}' to '${to}' stands in two rows${more(others)}`,
    fix: "a flow has one row: take one out, or add the two together; the way back is a row of its own, from and to changed over",
    example: { from: "c17", to: "c18", others: 0 },
  }),
  "zone-to-itself": entry({
    severity: "error",
    says: ({ name, others }: { name: string; others: number }) =>
      `a flow goes from '${name}' back into '${name}'${more(others)}`,
    fix: "a stirred cell that feeds itself changes nothing: take the row out",
    example: { name: "c17", others: 0 },
  }),
  "zone-names": entry({
    severity: "error",
    says: ({ name, cell, most }: { name: string; cell: string; most: number }) =>
      `more than ${most} names of the flow table are no cells, '${name}' for one; cells have names like '${cell}'`,
    fix: "write cells alike in both tables; names that are no cells are where streams enter and leave",
    example: { name: "17", cell: "c17", most: 1000 },
  }),
  "zone-terminals": entry({
    severity: "error",
    says: ({ name, side }: { name: string; side: "enters" | "leaves" }) =>
      side === "enters"
        ? `nothing enters the cells of '${name}': every \`from\` of the flow table is a cell`
        : `nothing leaves the cells of '${name}': every \`to\` of the flow table is a cell`,
    fix: ({ side }) =>
      side === "enters"
        ? "add rows from a name that is no cell, such as `feed`, to the cells where streams enter"
        : "add rows from the cells where streams leave to a name that is no cell, such as `out`",
    example: { name: "core", side: "leaves" },
  }),
  "zone-unbalanced": entry({
    severity: "error",
    says: (d: {
      name: string;
      cell: string;
      enters: string;
      leaves: string;
      off: string;
      tolerance: string;
      others: number;
    }) =>
      `${d.enters} enters the cell '${d.cell}' of '${d.name}' and ${d.leaves} leaves it: ${d.off} out of balance, where ${d.tolerance} is allowed${more(d.others, "cell")}`,
    fix: ({ off }) =>
      `look for flows that are missing or doubled; if the table is only rounded, allow it with \`tolerance:\` above ${off}`,
    example: {
      name: "core",
      cell: "c17",
      enters: "2.5 L/min",
      leaves: "2.4 L/min",
      off: "4 %",
      tolerance: "1e-7 %",
      others: 2,
    },
  }),
  "zone-reconciled": entry({
    severity: "warning",
    says: ({ name, worst, most }: { name: string; worst: string; most: string }) =>
      `cells of '${name}' are out of balance by up to ${worst}; they are brought into balance by changing flows by up to ${most}`,
    fix: "export the flows with more digits; what is left is as near to the table as balance allows",
    example: { name: "core", worst: "0.01 %", most: "0.006 %" },
  }),
  "zone-irreconcilable": entry({
    severity: "error",
    says: ({ name }: { name: string }) => `the flows of '${name}' cannot be brought into balance`,
    fix: "see that every cell has a way to an outlet, and that the inlets bring what the table says; then lower `tolerance:`",
    example: { name: "core" },
  }),
  "zone-still": entry({
    severity: "warning",
    says: ({ name, cells, first, volume }: { name: string; cells: number; first: string; volume: string }) =>
      cells === 1
        ? `no flow reaches the cell '${first}' of '${name}': its ${volume} counts as dead`
        : `no flow reaches ${cells} cells of '${name}', '${first}' for one: their ${volume} counts as dead`,
    fix: "take such cells out of the table, or join them to those beside them",
    example: { name: "core", cells: 12, first: "c17", volume: "3.2 L" },
  }),
  "zone-outlets": entry({
    severity: "error",
    says: ({ name, outlets }: { name: string; outlets: readonly string[]; to: string }) =>
      `flows leave '${name}' to ${quoted(outlets)}, none of them a cell; \`to\` does not tell them apart`,
    fix: ({ outlets, to }) =>
      `if all are outlets, give each its destination, such as {${outlets[0]}: ${to}}; otherwise correct the name of the cell`,
    example: { name: "core", outlets: ["out", "loop"], to: "product" },
  }),
  "zone-no-outlet": entry({
    severity: "error",
    says: ({
      name,
      outlet,
      known,
    }: {
      name: string;
      outlet: string;
      known: readonly string[];
      nearest: string | undefined;
    }) => `no flow of '${name}' leaves to '${outlet}'; they leave to ${quoted(known)}`,
    fix: ({ nearest, known }) =>
      nearest
        ? `did you mean '${nearest}'?`
        : `write ${known.length === 1 ? `'${known[0]}'` : "one of these"} in its place`,
    example: { name: "core", outlet: "outt", known: ["out"], nearest: "out" },
  }),
  "zone-outlet-open": entry({
    severity: "error",
    says: ({ name, outlet }: { name: string; outlet: string; known: readonly string[] }) =>
      `flows of '${name}' leave to '${outlet}', which is no cell and has no destination`,
    fix: ({ outlet }) =>
      `add it to \`to\`, such as {${outlet}: product}, or correct the table if '${outlet}' should be a cell`,
    example: { name: "core", outlet: "loop", known: ["out", "loop"] },
  }),
  "zone-inlet": entry({
    severity: "error",
    says: ({ name, inlet }: { name: string; inlet: string; known: readonly string[] }) =>
      `flows of '${name}' come from '${inlet}', which is no cell, and no stream enters there`,
    fix: ({ name, inlet, known }) =>
      `send a stream to \`${known.length === 1 ? name : `${name}.${inlet}`}\`, or correct the table if '${inlet}' should be a cell`,
    example: { name: "core", inlet: "feed", known: ["feed"] },
  }),
  "zone-inlet-open": entry({
    severity: "error",
    says: ({ name, known }: { name: string; known: readonly string[] }) =>
      `'${name}' has the inlets ${quoted(known)}; this stream does not say which it enters`,
    fix: ({ name, known }) => `write \`${name}.${known[0]}\`, say; if one of them should be a cell, correct the table`,
    example: { name: "core", known: ["feed", "return"] },
  }),
  "zone-inflow": entry({
    severity: "error",
    says: ({
      name,
      inlet,
      brings,
      table,
      shares,
    }: {
      name: string;
      inlet: string;
      brings: string;
      table: string;
      shares: boolean;
    }) =>
      `streams bring ${brings} to '${inlet}' of '${name}', where its table has ${table}${shares ? ", and the other inlets are not in the same proportion" : ""}`,
    fix: ({ shares }) =>
      shares
        ? "make the streams to its inlets stand to each other as in the table"
        : "write `follow: inflow` under `flows:` to scale the table to what enters, or correct the one that is wrong",
    example: { name: "core", inlet: "feed", brings: "10 L/min", table: "12 L/min", shares: false },
  }),
} as const;
