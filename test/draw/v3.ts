/** A vessel with a leg, a bulk, a corner, dead water and a bypass; invented. */
export const v3 = `network: Ester hydrolysis vessel V-3, as built
format: 1
constants:
  total: 1000 L
parameters:
  bypass: {value: 10 %, between: [0 %, 60 %]}
  riser: {value: 150 L, between: [5 L, 480 L]}
  renewal: {value: 1.5 L/min, between: [0.01 L/min, 50 L/min], spacing: log}
feeds:
  feed: {flow: 10 L/min, to: {inlet-leg: rest, product: bypass}}
compartments:
  inlet-leg: {kind: tubular, volume: riser, to: bulk}
  bulk:
    kind: stirred
    volume: total - riser - 250 L
    to: {product: rest, inlet-leg: 30 %}
    exchange: {corner: renewal}
  corner: {kind: stirred, volume: 200 L}
  sump: {kind: dead, volume: 50 L}
outlets: [product]
`;
