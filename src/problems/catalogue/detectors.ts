import { entry } from "../problem.js";

const points = (n: number): string => `${n} ${n === 1 ? "reading" : "readings"}`;

/** From what a detector shows to a concentration, and what is not believed of it. */
export const detectorEntries = {
  "calibration-incomplete": entry<Record<never, never>>({
    severity: "error",
    says: () => "a calibration needs `rise` and `per`, or `points`",
    fix: "write how far the reading rises at which concentration, `{rise: 1.9 mS/cm, per: 1 g/L}`, or name a table of standards under `points:`",
  }),
  "calibration-twice": entry<Record<never, never>>({
    severity: "error",
    says: () => "a calibration is either a slope (`blank`, `rise`, `per`) or a table of `points`, not both",
    fix: "keep the `points`: they hold the blank, too, as the standard of 0",
  }),
  "standards-few": entry<{ standards: number; distinct: number }>({
    severity: "error",
    says: ({ standards, distinct }) =>
      `${standards} ${standards === 1 ? "standard" : "standards"} at ${distinct} ${distinct === 1 ? "concentration" : "concentrations"}: a curve with its uncertainty needs 3 at 2 or more`,
    fix: "measure more standards, or give the slope alone by `rise` and `per`",
  }),
  "standards-flat": entry<{ unit: string }>({
    severity: "error",
    says: ({ unit }) => `the standards do not tell that the reading in ${unit} changes with concentration at all`,
    fix: "check the columns of the table; measure standards further apart",
  }),
  "standards-turn": entry<{ at: string }>({
    severity: "error",
    says: ({ at }) =>
      `the reading turns round at about ${at}, within the standards: one reading stands for two concentrations`,
    fix: "leave out the standards beyond the turn and keep the test below it (a dye that quenches itself must be diluted)",
  }),
  "standards-exceeded": entry<{ points: number; most: string; last: string }>({
    severity: "warning",
    says: ({ points: n, most, last }) =>
      `${points(n)} lie above the highest standard: up to ${most}, standards end at ${last}`,
    fix: "measure a higher standard, or declare the highest as `limits: {above: …}`, so that a fit takes those for censored",
  }),
  "calibration-left": entry<{ row: number; read: string; others: number }>({
    severity: "error",
    says: ({ row, read, others }) =>
      `row ${row}: the calibration curve never reaches ${read}${others > 0 ? `, nor what ${others} more rows read` : ""}`,
    fix: "measure standards up to there, or leave these readings out",
  }),
  "temperature-far": entry<{ row: number; kelvin: number }>({
    severity: "error",
    says: ({ row, kelvin }) =>
      `row ${row}: ${Math.abs(kelvin).toFixed(0)} K from the temperature of the calibration, a share per kelvin makes no sense`,
    fix: "check the column and the unit of the temperature",
  }),
  "counter-blind": entry<{ row: number; read: string }>({
    severity: "error",
    says: ({ row, read }) => `row ${row}: a counter with this dead time cannot show ${read}`,
    fix: "check the dead time and the unit of the readings",
  }),
  "limit-unread": entry<{ limit: string }>({
    severity: "error",
    says: ({ limit }) => `the calibration curve never reaches ${limit}, so that is no limit of a concentration`,
    fix: "write the limit as a concentration, such as that of the highest standard, or measure standards up to there",
  }),
  "limits-reversed": entry<{ below: string; above: string }>({
    severity: "error",
    says: ({ below, above }) => `nothing lies between the limits: below ${below}, above ${above}`,
    fix: "exchange `below` and `above`",
  }),
  "mix-sum": entry<{ total: string; rests: number }>({
    severity: "error",
    says: ({ total, rests }) =>
      rests > 1 ? "`rest` stands more than once in a mix" : `the shares of a mix add to ${total} %`,
    fix: "write `rest` for one of them, or make them add to 100 %",
  }),
  "retained-unknown": entry<{ name: string; nearest: string | undefined; known: readonly string[] }>({
    severity: "error",
    says: ({ name, nearest }) =>
      `'${name}' is no parameter or constant of the network${nearest ? `; did you mean '${nearest}'?` : ""}`,
    fix: ({ known }) =>
      known.length > 0 ? `write a number such as 1.4, or one of ${known.join(", ")}` : "write a number, such as 1.4",
  }),
};
