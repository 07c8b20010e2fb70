/** A way to write clock times or dates, as a trial declares it (`h:m:s`, `d.M.y h:m`). */
export interface ClockFormat {
  readonly text: string;
  /** True where it holds a date: its times need no midnight wrap. */
  readonly dated: boolean;
  /** Seconds since midnight, or since 1970-01-01 where dated; undefined where the text does not fit. */
  read(text: string): number | undefined;
}

type Part = "year" | "month" | "day" | "hour" | "minute" | "second" | "half" | "zone";

const patterns: Readonly<Record<Part, string>> = {
  year: "(\\d{4}|\\d{2})",
  month: "(\\d{1,2}|[A-Za-z]{3,9})",
  day: "(\\d{1,2})",
  hour: "(\\d{1,4})",
  minute: "(\\d{1,5})",
  second: "(\\d{1,7}(?:[.,]\\d+)?)",
  half: "([AaPp]\\.?[Mm]\\.?)",
  zone: "(Z|[+-]\\d{2}:?\\d{2})?",
};

/**
 * Compiles a format: `y` year, `M` month (number or English name), `d` day, `h` hour, `m` minute, `s` second (fractions
 * allowed), `am` the half of a 12-hour day, `Z` an offset from UTC. Repeated letters count once. An `m` beside `d` or `y`
 * is read as the month. Anything but a letter stands for itself. Undefined where the format makes no sense.
 */
export function clockFormat(text: string): ClockFormat | undefined {
  const tokens = text.match(/am|pm|y+|M+|d+|D+|h+|H+|m+|s+|Z|T|\s+|[^A-Za-z\s]|[A-Za-z]/g) ?? [];
  const letters = tokens.map((token) => (token === "am" || token === "pm" ? "a" : token[0]));
  const parts: Part[] = [];
  let pattern = "";
  for (const [i, letter] of letters.entries()) {
    if (letter === undefined) continue;
    if (letter === "T") pattern += "[Tt ]";
    else if (/\s/.test(letter)) pattern += "\\s+";
    else if (!/[A-Za-z]/.test(letter)) pattern += `\\${letter}`;
    else {
      const part = partOf(letter, neighbour(letters, i, -1), neighbour(letters, i, 1));
      if (part === undefined || parts.includes(part)) return undefined;
      parts.push(part);
      // "9:14 am" and "9:14am" are one format.
      pattern = (part === "half" ? pattern.replace(/\\s\+$/, "\\s*") : pattern) + patterns[part];
    }
  }
  const has = (part: Part) => parts.includes(part);
  const dated = has("year") && has("month") && has("day");
  const partDate = !dated && (has("year") || has("month") || has("day"));
  const clock = has("hour") || has("minute") || has("second");
  if (partDate || (!dated && !clock) || (has("half") && !has("hour"))) return undefined;
  const expression = new RegExp(`^${pattern}$`);
  return {
    text,
    dated,
    read(cell) {
      const found = expression.exec(cell.trim());
      return found === null ? undefined : seconds(parts, found, dated);
    },
  };
}

const neighbour = (letters: readonly (string | undefined)[], i: number, step: -1 | 1): string => {
  for (let k = i + step; k >= 0 && k < letters.length; k += step) {
    const letter = letters[k];
    if (letter !== undefined && /[A-Za-z]/.test(letter)) return letter.toLowerCase();
  }
  return "";
};

function partOf(letter: string, before: string, after: string): Part | undefined {
  if (letter === "m") {
    if (before === "h" || after === "s") return "minute";
    return /[dy]/.test(before) || /[dy]/.test(after) ? "month" : "minute";
  }
  const byLetter: Readonly<Record<string, Part>> = {
    y: "year",
    M: "month",
    d: "day",
    D: "day",
    h: "hour",
    H: "hour",
    s: "second",
    a: "half",
    Z: "zone",
  };
  return byLetter[letter];
}

const monthNames = ["jan", "feb", "mar", "apr", "may", "jun", "jul", "aug", "sep", "oct", "nov", "dec"];

function seconds(parts: readonly Part[], found: RegExpExecArray, dated: boolean): number | undefined {
  const text = (part: Part): string | undefined => found[parts.indexOf(part) + 1];
  const number = (part: Part): number => (parts.includes(part) ? Number(text(part)?.replace(",", ".")) : 0);
  let hour = number("hour");
  const [minute, second] = [number("minute"), number("second")];
  if (parts.includes("half")) {
    if (hour < 1 || hour > 12) return undefined;
    hour = (hour % 12) + (/^p/i.test(text("half") ?? "") ? 12 : 0);
  }
  if (dated && hour > 24) return undefined;
  if (parts.includes("hour") && minute >= 60) return undefined;
  if (parts.includes("minute") && second >= 61) return undefined;
  const clock = hour * 3600 + minute * 60 + second;
  if (!dated) return clock;
  const day = dayNumber(text("year") ?? "", text("month") ?? "", number("day"));
  return day === undefined ? undefined : day * 86_400 + clock - zoneSeconds(text("zone"));
}

function dayNumber(yearText: string, monthText: string, day: number): number | undefined {
  const year = Number(yearText) + (yearText.length > 2 ? 0 : Number(yearText) < 70 ? 2000 : 1900);
  const named = monthNames.indexOf(monthText.slice(0, 3).toLowerCase());
  const month = named >= 0 ? named : Number(monthText) - 1;
  const date = new Date(Date.UTC(year, month, day));
  // Date rolls 31 June over into July: what does not come back as written was no date.
  return date.getUTCMonth() === month && date.getUTCDate() === day ? date.getTime() / 86_400_000 : undefined;
}

function zoneSeconds(zone: string | undefined): number {
  const found = /^([+-])(\d{2}):?(\d{2})$/.exec(zone ?? "");
  return found ? (found[1] === "-" ? -1 : 1) * (Number(found[2]) * 3600 + Number(found[3]) * 60) : 0;
}

const plainFormats = ["y-M-dTh:m:sZ", "y-M-dTh:mZ", "y/M/d h:m:s", "y/M/d h:m", "y-M-d", "h:m:s", "h:m:s am"]
  .map(clockFormat)
  .filter((format) => format !== undefined);

/** The format that a time gives away by itself (ISO dates, h:m:s), "ambiguous" for dates that could be read two ways. */
export function guessClock(cell: string): ClockFormat | "ambiguous" | undefined {
  const found = plainFormats.find((format) => format.read(cell) !== undefined);
  if (found) return found;
  return /^\s*\d{1,2}[./-]\d{1,2}[./-]\d{2,4}\b/.test(cell) ? "ambiguous" : undefined;
}
