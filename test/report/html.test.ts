import { expect, test } from "vitest";
import { paragraph } from "../../src/report/html.js";

test("a number is not parted from its unit at the end of a line, other words are", () => {
  expect(paragraph("from 85.6 % to 94.6\u2009%, 3.49 L/min & 5 tests in 2 places at 25 degC")).toBe(
    "<p>from 85.6\u00a0% to 94.6\u00a0%, 3.49\u00a0L/min &amp; 5 tests in 2 places at 25\u00a0degC</p>",
  );
});
