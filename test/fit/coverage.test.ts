import { readFileSync } from "node:fs";
import { describe, expect, test } from "vitest";
import { fit } from "../../src/fit/fit.js";
import { noises, vessels } from "../bench/coverage/cases.js";
import { textOf } from "./load.js";

const [smooth] = vessels(textOf);

/** The page that `npm run bench -- coverage` made. */
const page = readFileSync(new URL("../../shared/reference/measured/coverage.md", import.meta.url), "utf8");
const rows = page
  .split("\n")
  .filter((line) => line.startsWith("| ") && !line.startsWith("| vessel"))
  .map((line) => line.split("|").map((cell) => cell.trim()));

describe("95 % intervals", () => {
  test("as measured over hundreds of sets, hold the truth about that often", () => {
    expect(rows.length).toBe(vessels(textOf).reduce((n, v) => n + v.errors.length * v.asked.length, 0));
    for (const [, , , , sets, ...shares] of rows) {
      expect(Number(sets)).toBe(500);
      for (const share of shares.filter((s) => s !== "")) {
        // Bold is outside 92 to 98, and the page says so.
        const [bold, value] = [share.startsWith("**"), Number(share.replaceAll("*", ""))];
        expect([share, bold]).toEqual([share, value < 92 || value > 98]);
        expect(Math.abs(value - 95)).toBeLessThan(5);
      }
    }
  });

  // The first 40 sets of each kind of error, counted anew: 33 or fewer of 40 at 95 % have a probability of 0.3 %.
  test.each(noises.map((n) => [n.title, n] as const))("linear ones, counted anew: %s", (_, noise) => {
    const held = Array.from({ length: 40 }, (_, k) => {
      const found = fit(smooth.network, [smooth.trial(1000 * (noises.indexOf(noise) + 1) + k, noise)], { starts: 0 });
      return smooth.asked.map((name) => {
        const [low, high] = found.fit?.parameters.find((p) => p.name === name)?.interval95 ?? [0, 0];
        return low <= smooth.truth[name] && smooth.truth[name] <= high;
      });
    });
    for (const j of smooth.asked.keys()) expect(held.filter((h) => h[j]).length).toBeGreaterThan(33);
  });
});
