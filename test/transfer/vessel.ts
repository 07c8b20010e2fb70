/** A network with one feed `in` of 1 L/min and one outlet `out`. */
export function vessel(compartments: string, to = "a"): string {
  return [
    "network: A vessel",
    "format: 1",
    "feeds:",
    `  in: {flow: 1 L/min, to: ${to}}`,
    "compartments:",
    compartments,
    "outlets: [out]",
    "",
  ].join("\n");
}
