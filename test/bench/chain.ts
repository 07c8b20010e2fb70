/** A network of n stirred compartments in a row with a bypass, a recycle, quiet corners and parameters, as text. Demo. */
export function chainNetwork(n: number): string {
  const corners = Math.floor(n / 5);
  const tanks = n - corners;
  const lines = [
    `network: Row of ${n} compartments`,
    "format: 1",
    "parameters:",
    "  bypass: {value: 5 %, between: [0 %, 40 %]}",
    "  renewal: {value: 0.5 L/min, between: [0.01 L/min, 5 L/min], spacing: log}",
    "feeds:",
    "  feed: {flow: 10 L/min, to: {tank-1: rest, product: bypass}}",
    "compartments:",
  ];
  for (let i = 1; i <= tanks; i++) {
    const corner = i % 4 === 0 && i / 4 <= corners ? `, exchange: {corner-${i / 4}: renewal}` : "";
    const to = i === tanks ? "{tank-1: 2 L/min, product: rest}" : `tank-${i + 1}`;
    lines.push(`  tank-${i}: {kind: stirred, volume: ${20 + (i % 7)} L, to: ${to}${corner}}`);
  }
  for (let i = 1; i <= corners; i++) lines.push(`  corner-${i}: {kind: stirred, volume: ${2 + (i % 3)} L}`);
  return `${lines.join("\n")}\noutlets: [product]\n`;
}
