import type { Io } from "./io.js";

/** One line on a terminal that is written over; nothing elsewhere. */
export interface Progress {
  say(text: string): void;
  /** Wipes the line. */
  done(): void;
}

export function progressOn({ isTerminal, err }: Pick<Io, "isTerminal" | "err">): Progress {
  if (!isTerminal) return { say: () => {}, done: () => {} };
  const wipe = "\r\u001b[2K";
  let shown = "";
  return {
    say(text) {
      if (text === shown) return;
      err(`${wipe}${text}`);
      shown = text;
    },
    done() {
      if (shown !== "") err(wipe);
      shown = "";
    },
  };
}
