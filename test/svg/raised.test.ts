import { expect, test } from "vitest";
import { withRaisedDigits } from "../../src/svg/raised.js";

test("powers that the shipped face has no signs for are set as small raised digits, in words alone", () => {
  const svg = `<svg><title>10⁻⁵</title><text x="1">4.33×10⁻⁵ mol/m³, 10²⁰, 10³</text></svg>`;
  const small = (digits: string): string => `<tspan baseline-shift="33%" font-size="72%">${digits}</tspan>`;
  expect(withRaisedDigits(svg)).toBe(
    `<svg><title>10⁻⁵</title><text x="1">4.33×10${small("\u22125")} mol/m³, 10${small("20")}, 10³</text></svg>`,
  );
});
