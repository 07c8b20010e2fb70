import type { Random } from "./random.js";

/** What stands for trouble: words of YAML, of JavaScript, of floating point, of the language itself. */
const odd: readonly string[] = [
  ..."__proto__ constructor prototype toString hasOwnProperty valueOf then length name".split(" "),
  ..."NaN nan 1e999 -1e999 .inf -.inf .nan Infinity 1e-999 -0 0x10 010 1_000 1e308 5e-324".split(" "),
  ..."-1 0 1 2 9007199254740993 1000000000 1e-300 ± +/- % L L/min m3 degC mol/L rest all t T".split(" "),
  ...["null", "~", "", "[]", "{}", "[", "]", "{", "}", ",", ": ", ":", "#", " #", "- ", "? ", "| ", "> ", "&a ", "*a"],
  ...[
    "<<: *a",
    "!!js/function",
    "!!binary",
    "---",
    "...",
    "%YAML 1.1",
    "'",
    '"',
    "\\",
    "\t",
    "\r",
    "\r\n",
    "\n",
    "`",
    "@",
  ],
  ...["\u0000", "\u2028", "\u202e", "\ufeff", "\ud800", "🧪", "é", "е", "½", "−", "１", " ", "\u200b"],
  ...[
    "((((((((",
    "))))",
    "2^2^2^9",
    "max(",
    "1 L + ",
    "1 / 0",
    "log(0)",
    "sqrt(0 - 1)",
    "* ",
    "../../../../etc/passwd",
  ],
  ...["0 L", "-1 L", "1e300 L", "0 L/min", "1e-300 L/min", "100 %", "101 %", "-5 %", "1e999 %", "0 K"],
];

/** Words, numbers, blanks and single signs. */
const tokens = (text: string): string[] => text.match(/[\p{L}_][\p{L}\p{N}_.-]*|\d[\d.eE+-]*|\s+|[^\s]/gu) ?? [];

/** What a hurried editor does: words lost, doubled, exchanged, misspelled; lines moved, pushed in and out. */
export const tokenMutations: readonly ((text: string, random: Random) => string)[] = [
  (text, random) => changed(text, random, (all, i) => all.splice(i, 1)),
  (text, random) => changed(text, random, (all, i) => all.splice(i, 0, all[i])),
  (text, random) => changed(text, random, (all, i) => all.splice(i, 1, random.pick(odd))),
  (text, random) => changed(text, random, (all, i) => all.splice(i, 0, random.pick(odd))),
  (text, random) =>
    changed(text, random, (all, i) => {
      const j = random.below(all.length);
      [all[i], all[j]] = [all[j], all[i]];
    }),
  (text, random) => changed(text, random, (all, i) => all.splice(i, 1, random.pick(all))),
  (text, random) =>
    changed(text, random, (all, i) => {
      const word = all[i];
      const at = random.below(word.length + 1);
      all[i] = word.slice(0, at) + random.pick([...word]) + word.slice(at);
    }),
  (text, random) => {
    const numbers = [...text.matchAll(/\d+(\.\d+)?/g)];
    if (numbers.length === 0) return text;
    const { 0: old, index } = random.pick(numbers);
    const put = random.pick([
      "0",
      `-${old}`,
      `${old}e300`,
      `${old}e-300`,
      `${old}000000`,
      "1e999",
      old.slice(1),
      `${old},5`,
    ]);
    return text.slice(0, index) + put + text.slice(index + old.length);
  },
  (text, random) => linesChanged(text, random, (all, i) => all.splice(i, 1)),
  (text, random) => linesChanged(text, random, (all, i) => all.splice(i, 0, all[random.below(all.length)])),
  (text, random) => linesChanged(text, random, (all, i) => all.splice(i, 1, ` ${all[i]}`)),
  (text, random) => linesChanged(text, random, (all, i) => all.splice(i, 1, all[i].trimStart())),
  (text, random) => linesChanged(text, random, (all, i) => all.splice(i, 1, `\t${all[i]}`)),
  (text, random) => linesChanged(text, random, (all, i) => all.splice(i, 1, "#".repeat(random.pick([1, 2])) + all[i])),
];

function changed(text: string, random: Random, change: (all: string[], i: number) => unknown): string {
  const all = tokens(text);
  if (all.length > 0) change(all, random.below(all.length));
  return all.join("");
}

function linesChanged(text: string, random: Random, change: (all: string[], i: number) => unknown): string {
  const all = text.split("\n");
  change(all, random.below(all.length));
  return all.join("\n");
}
