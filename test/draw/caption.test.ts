import fc from "fast-check";
import { expect, test } from "vitest";
import { extent, titleLines } from "../../src/draw/caption.js";

const words = fc.array(fc.stringMatching(/^[A-Za-z0-9.,-]{1,12}$/), { minLength: 1, maxLength: 25 });

test("a title keeps its words in their order, and every line within the width unless one word is wider", () => {
  fc.assert(
    fc.property(words, fc.integer({ min: 60, max: 640 }), (all, width) => {
      const lines = titleLines(all.join(" "), width);
      expect(lines.map((l) => l.words).join(" ")).toBe(all.join(" "));
      for (const line of lines) {
        if (line.words.includes(" ")) expect(extent([line]).width).toBeLessThanOrEqual(width);
      }
    }),
  );
});

test("a short title is one line", () => {
  expect(titleLines("Test tank", 640)).toEqual([{ words: "Test tank", style: "title" }]);
});
