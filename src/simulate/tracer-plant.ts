import { type Block, orders } from "../compartments/block.js";
import { lossyRealization, slowedRealization } from "../compartments/realization.js";
import { columnsOf } from "../compile/node-list.js";
import { Part, type Plant, type PlantNode } from "../compile/plant.js";
import { plantFollowing } from "../compile/sends.js";
import { Structure } from "../compile/structure.js";
import type { Retained, Tracer } from "../model/trial.js";
import { type Complex, complex } from "../numerics/complex.js";
import type { Taylor } from "../numerics/taylor.js";

/**
 * The plant as a tracer sees it that divides otherwise than the liquid, is held back or lost on its way. A body that holds it back has so many times its
 * volume. A loss of first order thins the tracer as clean water would: into a cell of volume V as much as loss times V,
 * behind a tube or another body what its transfer function at s = loss makes of a steady stream. Both are exact; flows
 * between bodies stay as they are.
 */
export function tracerPlant(liquid: Plant, tracer: Tracer | undefined): Plant {
  const plant = plantFollowing(liquid, tracer?.follows?.of);
  const loss = tracer?.loss ?? 0;
  const retained = tracer?.retained ?? [];
  if (loss === 0 && retained.length === 0) return plant;
  const factors = retained.map((r) => ({ body: r.body, factor: factorOf(plant, r) }));
  const held = (name: string): number =>
    factors.reduce((f, r) => (name === r.body || name.startsWith(`${r.body}.`) ? f * r.factor : f), 1);
  const nodes = plant.nodes.map((n): PlantNode => {
    const factor = held(n.name);
    if (factor === 1) return n;
    return { ...n, volume: n.volume * factor, ...(n.block ? { block: slowed(n.block, factor) } : {}) };
  });
  return loss > 0 ? withLoss({ ...plant, nodes }, loss) : rebuilt(plant, nodes);
}

/** The retention of a body; a name is a value of the network. */
export const factorOf = (plant: Pick<Plant, "network" | "env">, { factor }: Retained): number => {
  if (typeof factor === "number") return factor;
  const named = plant.network.names.find((n) => n.name === factor.name);
  return named ? plant.env[named.slot] : 1;
};

function rebuilt(plant: Plant, nodes: readonly PlantNode[]): Plant {
  const total = nodes.reduce((sum, n) => sum + n.volume, 0);
  const active = nodes.reduce((sum, n) => sum + (n.inflow > 0 ? n.volume : 0), 0);
  // `plant.nodes` is made when asked for: a spread would keep the old one.
  return {
    ...plant,
    nodes,
    columns: columnsOf(nodes),
    volume: { total: total + plant.volume.dead, active, dead: plant.volume.dead },
  };
}

function withLoss(plant: Plant, loss: number): Plant {
  const nodes = [...plant.nodes];
  const [from, to, flow] = [[...plant.from], [...plant.to], [...plant.flow]];
  const water = nodes.length;
  nodes.push({ name: "", part: Part.Joint, volume: 0, inflow: 0 });
  let clean = 0;
  /** More that enters a node, without tracer. */
  const thin = (node: number, by: number): void => {
    from.push(water);
    to.push(node);
    flow.push(by);
    nodes[node] = { ...nodes[node], inflow: nodes[node].inflow + by };
    clean += by;
  };
  const behind = new Map<number, number>();
  const original = plant.nodes.length;
  for (let i = 0; i < original; i++) {
    const { part, volume, inflow, block } = nodes[i];
    if (!(inflow > 0) || part === Part.Joint) continue;
    if (part === Part.Cell) {
      thin(i, loss * volume);
      continue;
    }
    const kept = block ? block.transfer(complex.of(loss), inflow).re : Math.exp((-loss * volume) / inflow);
    if (block) nodes[i] = { ...nodes[i], block: lossy(block, loss, kept) };
    const joint = nodes.push({ name: nodes[i].name, part: Part.Joint, volume: 0, inflow }) - 1;
    for (let k = 0; k < plant.from.length; k++) if (from[k] === i) from[k] = joint;
    from.push(i);
    to.push(joint);
    flow.push(inflow);
    thin(joint, inflow * (1 / kept - 1));
    behind.set(i, joint);
  }
  nodes[water] = { ...nodes[water], inflow: clean };
  const links = { from: Int32Array.from(from), to: Int32Array.from(to) };
  const thinned = rebuilt(plant, nodes);
  const structure = new Structure(thinned.columns.part, links.from, links.to);
  return {
    ...thinned,
    ...links,
    flow: Float64Array.from(flow),
    structure,
    groups: structure.groups,
    exit: new MovedPlaces(plant.exit, behind),
  };
}

/** Places, some of which have moved to another node. */
class MovedPlaces extends Map<string, number> {
  constructor(
    private readonly places: ReadonlyMap<string, number>,
    private readonly moved: ReadonlyMap<number, number>,
  ) {
    super();
    for (const [name, node] of places) this.set(name, moved.get(node) ?? node);
  }

  override get(name: string): number | undefined {
    const node = this.places?.get(name);
    return node === undefined ? undefined : (this.moved.get(node) ?? node);
  }

  override has(name: string): boolean {
    return this.get(name) !== undefined;
  }
}

/** s and the volume of a body stand side by side in every transfer function: to multiply one is to multiply the other. */
function slowed(block: Block, factor: number): Block {
  const at = (s: Complex): Complex => complex.scale(s, factor);
  const { pockets } = block;
  return {
    ...block,
    volume: block.volume * factor,
    pockets: pockets && { ...pockets, volume: pockets.volume * factor },
    transfer: (s, flow) => block.transfer(at(s), flow),
    delay: (flow) => factor * block.delay(flow),
    undelayed: (s, flow) => block.undelayed(at(s), flow),
    spread: (s, flow) => block.spread(at(s), flow),
    series: (flow) => block.series(flow).map((c, k) => c * factor ** k),
    realize: (flow) => {
      const r = block.realize(flow);
      return r && slowedRealization(r, factor);
    },
  };
}

/** G(s + loss) / G(loss). */
function lossy(block: Block, loss: number, kept: number): Block {
  const at = (s: Complex): Complex => complex.add(s, complex.of(loss));
  const transfer: Block["transfer"] = (s, flow) => complex.scale(block.transfer(at(s), flow), 1 / kept);
  const late = (flow: number): number => Math.exp(-loss * block.delay(flow)) / kept;
  return {
    ...block,
    transfer,
    undelayed: (s, flow) => complex.scale(block.undelayed(at(s), flow), late(flow)),
    direct: (flow) => block.direct(flow) * late(flow),
    spread: (s, flow) => complex.scale(block.spread(at(s), flow), late(flow)),
    series: (flow) => taylorAt(transfer, loss / 2, flow),
    realize: (flow) => {
      const r = block.realize(flow);
      return r && lossyRealization(r, loss, late(flow));
    },
  };
}

/** Coefficients of a transfer function that is analytic within twice the radius, by Cauchy's integral over a circle. */
function taylorAt(transfer: Block["transfer"], radius: number, flow: number): Taylor {
  const points = 64;
  const sums = new Float64Array(orders);
  for (let p = 0; p < points; p++) {
    const angle = (2 * Math.PI * p) / points;
    const g = transfer({ re: radius * Math.cos(angle), im: radius * Math.sin(angle) }, flow);
    for (let k = 0; k < orders; k++) sums[k] += g.re * Math.cos(k * angle) + g.im * Math.sin(k * angle);
  }
  return sums.map((sum, k) => sum / points / radius ** k);
}
