import { describe, expect, test } from "vitest";
import * as bodies from "../../src/svg/bodies.js";
import { textWidth } from "../../src/svg/measure.js";
import { rounded, samples } from "../../src/svg/spine.js";

const box = { x: 10, y: 20, width: 120, height: 40 };
const count = (svg: string, what: string): number => svg.split(what).length - 1;

describe("body pictures", () => {
  test("n tanks share n - 1 walls, each with a notch where there is backflow", () => {
    expect(count(bodies.stirredBody(box, 4), 'class="wall"')).toBe(3);
    expect(count(bodies.stirredBody(box, 1), 'class="wall"')).toBe(0);
    expect(count(bodies.stirredBody(box, 4, true), 'class="return"')).toBe(3);
  });

  test("a cascade has the walls of the nearest whole number and prints its own", () => {
    const svg = bodies.cascadeBody(box, 3.4);
    expect(count(svg, 'class="wall thin"')).toBe(2);
    expect(svg).toContain("N = 3.4");
  });

  test("less dispersion, more bands", () => {
    const bands = [1, 10, 100].map((peclet) => count(bodies.dispersedBody(box, peclet), 'class="band"'));
    expect(bands[0]).toBeLessThan(bands[1]);
    expect(bands[1]).toBeLessThan(bands[2]);
  });

  test("all fill their box and stay inside", () => {
    const whole = `x="10" y="20" width="120" height="40"`;
    for (const svg of [
      bodies.stirredBody(box),
      bodies.tubularBody(box),
      bodies.dispersedBody(box, 5),
      bodies.laminarBody(box),
      bodies.cascadeBody(box, 3),
      bodies.deadBody(box),
    ])
      expect(svg).toContain(whole);
    expect(bodies.junctionBody(box)).toContain('r="20"');
  });
});

test("a rounded way keeps its ends and cuts its corners", () => {
  const corners = [
    { x: 0, y: 0 },
    { x: 40, y: 0 },
    { x: 40, y: 30 },
  ];
  const way = samples(rounded(corners, 10), 1);
  expect(way[0]).toMatchObject(corners[0]);
  expect(way[way.length - 1]).toMatchObject(corners[2]);
  // a quarter circle passes its corner at r (sqrt 2 - 1)
  const nearest = Math.min(...way.map((p) => Math.hypot(p.x - 40, p.y)));
  expect(nearest).toBeCloseTo(10 * (Math.SQRT2 - 1), 1);
});

test("text width grows with size, weight and length", () => {
  expect(textWidth("mmm", 12)).toBeGreaterThan(textWidth("iii", 12));
  expect(textWidth("10 L/min", 12, "bold")).toBeGreaterThan(textWidth("10 L/min", 12));
  expect(textWidth("ab", 24)).toBeCloseTo(2 * textWidth("ab", 12), 9);
});
