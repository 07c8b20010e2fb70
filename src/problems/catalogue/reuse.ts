import { entry } from "../problem.js";

const quoted = (names: readonly string[]): string => names.map((n) => `'${n}'`).join(", ");

const counted = (n: number, word: string): string => `${n} ${word}${n === 1 ? "" : "s"}`;

/** So many names can be listed in a fix. */
const fewNames = 12;

/** "did you mean …", else the few names that there are, else the way out without them. */
function help(nearest: string | undefined, known: readonly string[], before: string, otherwise: string): string {
  if (nearest) return `did you mean '${nearest}'?`;
  return known.length === 0 || known.length > fewNames ? otherwise : `${before}: ${quoted(known)}`;
}

/** Parts, and documents that are variants of others. */
export const reuseEntries = {
  "part-basis": entry<{ title: string; own: string; inside: string }>({
    severity: "error",
    says: ({ title, own, inside }) =>
      `'${title}' counts by ${inside} (\`basis: ${inside}\`), this network by ${own}: streams between them would not be the same thing`,
    fix: "give both the same `basis`; what a density makes of a volume is for their own files to say",
  }),
  "circular-use": entry<{ circle: readonly string[] }>({
    severity: "error",
    says: ({ circle }) =>
      circle.length === 2
        ? `'${circle[0]}' uses itself`
        : `these files use one another in a circle: ${circle.join(" -> ")}`,
    fix: "name another file here: what is used must not lead back to what uses it",
  }),
  "use-too-deep": entry<{ limit: number }>({
    severity: "error",
    says: ({ limit }) => `files lead to files more than ${limit} deep`,
    fix: "put what they share into one file; look for a link to a folder that holds itself",
    example: { limit: 50 },
  }),
  "outside-library": entry<{ file: string; root: string }>({
    severity: "error",
    says: ({ file, root }) =>
      `'${file}' lies outside the library, whose root is ${root === "." ? "the current folder" : `'${root}'`}`,
    fix: "copy it into the library, start from a folder that holds both, or allow it with --allow-outside",
  }),
  "nothing-to-remove": entry<{ name: string; nearest: string | undefined; known: readonly string[] }>({
    severity: "error",
    says: ({ name }) => `the change removes '${name}', which is not there`,
    fix: ({ nearest, known }) => help(nearest, known, "take it out, or name what is there", "take it out"),
  }),
  "change-with-base": entry<{ title: string }>({
    severity: "error",
    says: ({ title }) => `'${title}' is listed under \`changes\`, but is a variant of one network`,
    fix: "take `based-on` out of it, so that it can be laid over every rival; or list it under `rivals`",
  }),
  "unknown-port": entry<{
    name: string;
    part: string;
    side: "inlet" | "outlet";
    nearest: string | undefined;
    known: readonly string[];
  }>({
    severity: "error",
    says: ({ name, part, side }) => `the part '${part}' has no ${side} '${name}'`,
    fix: ({ nearest, side, known }) =>
      help(nearest, known, `its ${side}s`, known.length === 0 ? `declare one in its file` : `name one of its ${side}s`),
  }),
  "port-open": entry<{ part: string; side: "inlet" | "outlet"; known: readonly string[] }>({
    severity: "error",
    says: ({ part, side, known }) =>
      `the part '${part}' has ${known.length === 0 ? `no ${side}` : counted(known.length, side)}, so a bare name does not tell where the stream goes`,
    fix: ({ part, side, known }) =>
      known.length === 0
        ? `declare ${side === "inlet" ? "a feed" : "an outlet"} in its file`
        : side === "inlet"
          ? `write one of ${known.map((k) => `\`${part}.${k}\``).join(", ")}`
          : `map each of them, such as \`to: {${known.map((k) => `${k}: …`).join(", ")}}\``,
  }),
  "inlet-unfed": entry<{ part: string; inlet: string }>({
    severity: "error",
    says: ({ part, inlet }) => `no stream enters the part '${part}' by its inlet '${inlet}'`,
    fix: ({ part, inlet }) => `send a stream to \`${part}.${inlet}\`, or use a part without that feed`,
  }),
  "outlet-unmapped": entry<{ part: string; outlet: string }>({
    severity: "error",
    says: ({ part, outlet }) => `the outlet '${outlet}' of the part '${part}' goes nowhere`,
    fix: ({ outlet }) => `say under \`to:\` where it goes, such as \`${outlet}: product\``,
  }),
  "not-a-place": entry<{ outlet: string; text: string }>({
    severity: "error",
    says: ({ text }) =>
      `the \`to:\` of a part tells where each of its outlets leads, and ${quoted([text])} is no place`,
    fix: ({ outlet }) =>
      `name one place, such as \`${outlet}: product\`, or divide it: \`${outlet}: {loop: 30 %, product: rest}\``,
  }),
  "repeat-ports": entry<{ part: string; inlets: number; outlets: number }>({
    severity: "error",
    says: ({ part, inlets, outlets }) =>
      `'${part}' cannot be repeated in series: it has ${counted(inlets, "inlet")} and ${counted(outlets, "outlet")}, not one of each`,
    fix: "take `repeat` out and place the part several times under names of their own",
  }),
  "unknown-binding": entry<{
    name: string;
    part: string;
    nearest: string | undefined;
    known: readonly string[];
    flow: boolean;
  }>({
    severity: "error",
    says: ({ name, part, flow }) =>
      flow
        ? `'${name}' cannot be bound: the flow into the part '${part}' is what its streams bring`
        : `the part '${part}' leaves no constant or parameter '${name}' open`,
    fix: ({ nearest, known, flow }) =>
      flow
        ? "take the line out, and send the flow that you want to the part"
        : help(
            nearest,
            known,
            "what is open in it",
            known.length === 0 ? "take the line out" : "name one that it declares",
          ),
  }),
  "circular-flow": entry<{ inlet: string; circle: readonly string[] }>({
    severity: "error",
    says: ({ inlet, circle }) =>
      `the flow into '${inlet}' depends on itself: ${
        circle.length > 2 ? circle.join(" -> ") : "streams that it sets lead back to it"
      }`,
    fix: "inside a recycle, divide streams by shares (`30 %`) in place of flows made of `feed.flow`",
  }),
  "too-many-bodies": entry<{ limit: number; of: "bodies" | "parts" }>({
    severity: "error",
    says: ({ limit, of }) =>
      of === "bodies"
        ? `parts and their repeats come to more than ${limit} bodies`
        : `more than ${limit} parts are placed, those inside parts counted`,
    fix: ({ of }) =>
      of === "bodies"
        ? "lower `repeat`, or write many cells as `kind: zones`"
        : "write equal parts in a row as one with `repeat`, or many cells as `kind: zones`",
  }),
  "too-many-files": entry<{ limit: number }>({
    severity: "error",
    says: ({ limit }) => `the parts come from more than ${limit} files`,
    fix: "describe what is alike in one file, and give what differs under `with`",
    example: { limit: 1000 },
  }),
} as const;
