import { type CurveLine, plotCurves } from "../../draw/curves.js";
import { columnWidth } from "../../draw/picture.js";
import type { FigureData } from "../../draw/plotted.js";
import type { Banded, Residence } from "../../study/residence.js";
import { inUnit, type Unit } from "../../units/unit.js";
import type { Figure } from "../input.js";

/** Exit age, share left and inside, internal age and intensity of the fitted vessel, each with what the fit leaves possible. */
export function residenceFigures(of: Residence, unit: Unit): Figure[] {
  const time = of.time.map((t) => inUnit(t, unit));
  const perTime = (values: Float64Array): Float64Array => values.map((v) => v * unit.factor);
  const spikes = of.spikes.map((s) => ({ x: inUnit(s.time, unit), area: s.area }));
  const line = (label: string, { value, band }: Banded, shown = (v: Float64Array): Float64Array => v): CurveLine => ({
    label,
    x: time,
    y: shown(value),
    ...(band ? { band: { low: shown(band.low), high: shown(band.high) } } : {}),
  });
  const x = `time since it entered at '${of.feed}', ${unit.name}`;
  const draw = (
    name: string,
    title: string,
    y: string,
    lines: readonly CurveLine[],
    caption: string,
    log = false,
  ): Figure => {
    const made = plotCurves({ title, x, y, lines }, { untitled: true, width: columnWidth, height: 160, log });
    return { name, ...made, caption: `${caption}${bandWords(lines, made.data)}` };
  };
  return [
    draw(
      "exit-age",
      "Ages at the outlet and inside",
      `density, 1/${unit.name}`,
      [{ ...line("E, leaving", of.exitAge, perTime), spikes }, line("I, inside", of.internalAge, perTime)],
      `Ages of what leaves (E) and of what is inside (I), on a logarithmic axis: a straight stretch is one well-mixed body.`,
      true,
    ),
    draw(
      "left-and-inside",
      "Share that has left and that is still inside",
      "share",
      [line("F, left", of.left), line("W, inside", of.washout)],
      `What has left (F) and what is still inside (W) of liquid that came in together.`,
    ),
    draw(
      "intensity",
      "Escape intensity",
      `intensity, 1/${unit.name}`,
      [line("E/W", of.intensity, perTime)],
      `How readily what is still inside leaves (E over W). Level: well mixed. Falling after its peak: liquid that is held back, or parallel paths.`,
    ),
  ];
}

/** A band must reach so many px beyond its line to be seen behind it. */
const seen = 1;

/** What the bands are, where there are any, and whether they can be seen. */
function bandWords(lines: readonly CurveLine[], data: FigureData): string {
  if (!("plots" in data) || !lines.some((l) => l.band)) return "";
  const [{ box, y }] = data.plots;
  const at = (v: number): number =>
    box.height * (y.log ? Math.log(v / y.from) / Math.log(y.to / y.from) : (v - y.from) / (y.to - y.from));
  const inside = (v: number): boolean => v > y.from && v < y.to;
  const wide = lines.some(({ band, y: value }) =>
    Array.from(band?.low ?? []).some((low, k) => {
      const high = band?.high[k] ?? Number.NaN;
      return inside(low) && inside(high) && Math.max(at(high) - at(value[k]), at(value[k]) - at(low)) > 1 + seen;
    }),
  );
  return wide
    ? " The shaded bands hold 95 % of the curves that the fit leaves possible."
    : " What holds 95 % of the curves that the fit leaves possible is narrower than the lines.";
}
