import { inflateSync } from "node:zlib";
import { describe, expect, test } from "vitest";
import { pngOf } from "../../src/cli/png.js";
import { picture } from "../../src/draw/picture.js";
import { text } from "../../src/svg/marks.js";
import { backmix, json } from "./fake.js";

const vessel = "networks/demo/both.yaml";

describe("draw -o F.png", () => {
  test("writes a PNG of twice the drawing's size", async () => {
    const { status, out, written } = await backmix(["draw", vessel, "-o", "both.png"]);
    expect(status).toBe(0);
    expect(out).toBe("both.png: R-12 with a bypass and a quiet corner\n");
    const { width, height } = decode(Buffer.from(written.get("both.png") ?? "", "latin1"));
    const svg = (await backmix(["draw", vessel])).out;
    const [, w, h] = /width="([\d.]+)" height="([\d.]+)"/.exec(svg) ?? [];
    expect(Math.abs(width - 2 * Number(w))).toBeLessThanOrEqual(1);
    expect(Math.abs(height - 2 * Number(h))).toBeLessThanOrEqual(1);
  });

  test("its words are drawn, in their own face and weight", async () => {
    const ink = async (style: string, words: string): Promise<number> => {
      const view = { x: 0, y: 0, width: 200, height: 40 };
      const { pixels } = decode(await pngOf(picture("t", "d", view, "light", [text(10, 25, words, style)])));
      return pixels.filter((v) => v < 128).length;
    };
    const plain = await ink("plain", "36.4 L/min, Péclet");
    expect(plain).toBeGreaterThan(300);
    expect(await ink("name", "36.4 L/min, Péclet")).toBeGreaterThan(1.2 * plain);
    expect(await ink("plain", "")).toBe(0);
    // What the drawings use beyond ASCII has glyphs: no two of them look alike, as boxes for what is missing would.
    const special = await Promise.all([..."³²µ°Δ−→·×"].map((c) => ink("title", c)));
    expect(Math.min(...special)).toBeGreaterThan(0);
    expect(new Set(special).size).toBeGreaterThan(6);
  });

  test("is told as JSON like the others, and what it cannot draw to is refused", async () => {
    expect((await json(["draw", vessel, "-o", "a.png"])).document).toMatchObject({ ok: true, written: "a.png" });
    const { status, err } = await backmix(["draw", vessel, "-o", "a.pdf"]);
    expect(status).toBe(2);
    expect(err).toContain("draw to .svg, .png or .html");
  });
});

describe("draw --show and --compare", () => {
  test("shows what it is asked for, and says what there is", async () => {
    const age = await backmix(["draw", vessel, "--show", "mean age"]);
    expect(age.status).toBe(0);
    expect(age.out).toContain("mean age");
    const made = await backmix([
      "draw",
      vessel,
      "--show",
      "production of ester",
      "--duty",
      "networks/demo/normal.yaml",
    ]);
    expect(made.out).toContain("consumption of ester");
    const wrong = await backmix(["draw", vessel, "--show", "mean agee"]);
    expect(wrong.status).toBe(2);
    expect(wrong.err).toContain("did you mean 'mean age'?");
    const alone = await backmix(["draw", vessel, "--show", "production of ester"]);
    expect(alone.err).toContain("--duty FILE");
  });

  test("compares with another network, whose faults count like those of the first", async () => {
    const { out } = await backmix(["draw", "networks/demo/bypass.yaml", "--compare", vessel]);
    expect(out).toContain("R-12 with a bypass and dead water → R-12 with a bypass and a quiet corner");
    const { status, err } = await backmix(["draw", vessel, "--compare", "nowhere.yaml"]);
    expect(status).toBe(1);
    expect(err).toContain("nowhere.yaml");
  });
});

/** Size and grey values of a PNG with eight bits per channel, not interlaced (PNG specification, W3C 2003). */
function decode(png: Uint8Array): { width: number; height: number; pixels: Uint8Array } {
  const bytes = Buffer.from(png);
  expect(bytes.subarray(1, 4).toString()).toBe("PNG");
  const chunks: Buffer[] = [];
  let [width, height, channels] = [0, 0, 4];
  for (let at = 8; at < bytes.length; ) {
    const length = bytes.readUInt32BE(at);
    const kind = bytes.subarray(at + 4, at + 8).toString();
    const body = bytes.subarray(at + 8, at + 8 + length);
    if (kind === "IHDR")
      [width, height, channels] = [body.readUInt32BE(0), body.readUInt32BE(4), body[9] === 2 ? 3 : 4];
    if (kind === "IDAT") chunks.push(body);
    at += length + 12;
  }
  const raw = inflateSync(Buffer.concat(chunks));
  const row = width * channels;
  const out = new Uint8Array(height * row);
  for (let y = 0; y < height; y++) {
    const filter = raw[y * (row + 1)];
    for (let x = 0; x < row; x++) {
      const left = x >= channels ? out[y * row + x - channels] : 0;
      const up = y > 0 ? out[(y - 1) * row + x] : 0;
      const corner = x >= channels && y > 0 ? out[(y - 1) * row + x - channels] : 0;
      out[y * row + x] = raw[y * (row + 1) + 1 + x] + predicted(filter, left, up, corner);
    }
  }
  const pixels = new Uint8Array(width * height).map((_, k) => (out[k * channels] + out[k * channels + 1]) / 2);
  return { width, height, pixels };
}

function predicted(filter: number, left: number, up: number, corner: number): number {
  if (filter < 3) return [0, left, up][filter];
  if (filter === 3) return (left + up) >> 1;
  const p = left + up - corner;
  const [a, b, c] = [Math.abs(p - left), Math.abs(p - up), Math.abs(p - corner)];
  return a <= b && a <= c ? left : b <= c ? up : corner;
}
