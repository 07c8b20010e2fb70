import { type Block, orders } from "../compartments/block.js";
import { Part, type PlantNode } from "../compile/plant.js";
import { type Complex, complex } from "../numerics/complex.js";
import { type Taylor, taylor, variable } from "../numerics/taylor.js";

const { of, add, divide, exp, scale } = complex;
const one = of(1);
const series = taylor(orders);
const s1 = variable(orders);

/** What a node makes of tracer that passes it: outflow = G(s) times the mean of what enters. s in 1/s. */
export function gain({ part, volume, inflow, block }: PlantNode, s: Complex): Complex {
  if (!(inflow > 0)) return of(0);
  switch (part) {
    case Part.Cell:
      return divide(one, add(one, scale(s, volume / inflow)));
    case Part.Delay:
      return exp(scale(s, -volume / inflow));
    case Part.Joint:
      return one;
    case Part.Block:
      return (block as Block).transfer(s, inflow);
  }
}

/** Its coefficients in powers of s, orders 0 to 3; infinite from the order on at which moments are. */
export function gainSeries({ part, volume, inflow, block }: PlantNode): Taylor {
  if (!(inflow > 0)) return series.of(0);
  switch (part) {
    case Part.Cell:
      return series.divide(series.of(1), series.add(series.of(1), series.scale(s1, volume / inflow)));
    case Part.Delay:
      return series.exp(series.scale(s1, -volume / inflow));
    case Part.Joint:
      return series.of(1);
    case Part.Block:
      return (block as Block).series(inflow);
  }
}
