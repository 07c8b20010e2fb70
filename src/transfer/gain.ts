import { type Block, orders } from "../compartments/block.js";
import { Part, type Plant, type PlantNode } from "../compile/plant.js";
import { type Complex, complex } from "../numerics/complex.js";

const { of, add, divide, exp, scale } = complex;
const one = of(1);

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

/** The coefficients of every node's gain, one column per order; infinite from the order on at which moments are. */
export function gainColumns(plant: Plant): readonly Float64Array[] {
  const { size, part, volume, inflow } = plant.columns;
  const columns = Array.from({ length: orders }, () => new Float64Array(size));
  for (let i = 0; i < size; i++) {
    if (!(inflow[i] > 0)) continue;
    columns[0][i] = 1;
    if (part[i] === Part.Joint) continue;
    const tau = volume[i] / inflow[i];
    const own = part[i] === Part.Block ? plant.nodes[i].block?.series(inflow[i]) : undefined;
    for (let k = 1; k < orders; k++) {
      if (own) columns[k][i] = own[k];
      // 1 / (1 + s tau), or exp(-s tau)
      else columns[k][i] = columns[k - 1][i] * (part[i] === Part.Cell ? -tau : -tau / k);
    }
  }
  return columns;
}
