import fc from "fast-check";
import { expect, test } from "vitest";
import { CellNames, numberAt } from "../../src/read/cells.js";

const bytesOf = (text: string): Uint8Array => new TextEncoder().encode(text);
const read = (text: string, point = "."): number => {
  const bytes = bytesOf(`,${text};`);
  return numberAt(bytes, 1, 1 + bytesOf(text).length, point.charCodeAt(0));
};

test("numbers are read to the very double that JavaScript reads", () => {
  const digits = fc.string({ unit: fc.constantFrom(..."0123456789"), minLength: 1, maxLength: 24 });
  const written = fc
    .tuple(fc.constantFrom("", "-", "+"), digits, fc.option(digits), fc.option(fc.integer({ min: -330, max: 330 })))
    .map(
      ([sign, whole, part, power]) =>
        `${sign}${whole}${part === null ? "" : `.${part}`}${power === null ? "" : `e${power}`}`,
    );
  fc.assert(
    fc.property(written, (text) => void expect(read(text)).toBe(Number(text))),
    { numRuns: 2000 },
  );
  fc.assert(
    fc.property(
      fc.double({ noNaN: true, noDefaultInfinity: true }),
      (x) => void expect(read(String(x))).toBe(Number(String(x))),
    ),
  );
});

test.each([
  ".5",
  "5.",
  "1E3",
  "-0.25",
  "9007199254740993",
  "0.1",
  "1e-5",
  "123456789012345678901234567890",
  "4.9e-324",
])("%s is a number", (text) => expect(read(text)).toBe(Number(text)));

test("the decimal sign may be a comma", () => expect(read("1,25", ",")).toBe(1.25));

test.each(["", ".", "-", "ten", "1.2.3", "1e", "1e+", "0x10", "NaN", "Infinity", "1 2", "1,5", "--1", "1e5x"])(
  "%j is none",
  (text) => expect(read(text)).toBeNaN(),
);

test("names are numbered in their order, each once, and found again from any buffer", () => {
  const names = fc.array(fc.string({ minLength: 1, maxLength: 6 }), { maxLength: 400 });
  fc.assert(
    fc.property(names, (list) => {
      const known = new Map<string, number>();
      const bytes = bytesOf(list.join("\n"));
      const index = new CellNames(bytes, 4);
      let at = 0;
      for (const name of list) {
        const length = bytesOf(name).length;
        const number = index.add(at, at + length);
        const earlier = known.get(name);
        expect(number).toBe(earlier === undefined ? known.size : -1 - earlier);
        if (earlier === undefined) known.set(name, number);
        at += length + 1;
      }
      for (const [name, number] of known) expect([index.numberOf(name), index.nameOf(number)]).toEqual([number, name]);
      expect(index.numberOf("a name that is too long to be one")).toBe(-1);
    }),
  );
});
