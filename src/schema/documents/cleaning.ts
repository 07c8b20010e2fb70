import type { KeyShape } from "../shape.js";
import { choice, column, csv, list, quantity, record, text } from "./common.js";

const timeColumn: KeyShape = {
  says: "The column of times: elapsed times with their `unit`, clock times or dates with their `format`. Times as `h:m:s` and ISO dates need neither.",
  example: '{column: Time, format: "h:m:s"}',
  snippet: "{column: t, unit: min}",
  needs: "value",
  shape: column("the times", {
    format: {
      shape: text,
      says: "How clock times are written, from `d M y h m s` and `am` as the file has them: `h:m:s`, `h:m am`, `d.M.y h:m`. Dates need it where day and month could be confused. A clock without dates may pass midnight.",
      example: '"h:m:s"',
    },
  }),
};

const valueColumn: KeyShape = {
  says: "The column of readings, with the unit of the detector. Where there is a `calibration`, or `scale: free`, any word may be that unit.",
  example: '{column: "Cond [mS/cm]", unit: mS/cm}',
  snippet: "{column: c, unit: g/L}",
  shape: column("the readings"),
};

const calibration: KeyShape = {
  says: "From the unit of the detector to a concentration: (reading - blank) / rise * per; or a curve through `points`; or both left out, where `scale: free` needs the `temperature` taken out only.",
  example: "{blank: 0.21 mS/cm, rise: 1.9 mS/cm, per: 1 g/L}",
  shape: record({
    blank: {
      shape: quantity(),
      says: "What the detector shows with no tracer, in its own unit.",
      example: "0.21 mS/cm",
      default: "0",
    },
    rise: {
      shape: quantity(),
      says: "By how much the reading rises at the concentration `per`; below zero where it falls.",
      example: "1.9 mS/cm",
      needs: "per",
    },
    per: {
      shape: quantity(),
      says: "The concentration that makes it rise by `rise`.",
      example: "1 g/L",
      needs: "rise",
    },
    points: {
      says: "A table of standards, instead of `blank`, `rise` and `per`: what the detector read at which concentration. A straight line is drawn through them, or a parabola where five standards or more show with 95 % confidence that the line is not straight. What the scatter of the standards leaves open is carried into the errors of `moments` and the intervals of a fit. A curve that turns round within the standards (a lamp that quenches itself, say) gives two concentrations for one reading and is refused.",
      example: "{file: standards.csv, reading: {column: mV, unit: mV}, value: {column: C, unit: mg/L}}",
      shape: record({
        file: {
          shape: text,
          says: "The table, a CSV file relative to this one.",
          required: true,
          example: "standards.csv",
        },
        reading: {
          shape: column("what the detector read"),
          says: "The column of readings, in the unit of the detector.",
          required: true,
          example: "{column: mV, unit: mV}",
        },
        value: {
          shape: column("the concentrations"),
          says: "The column of known concentrations.",
          required: true,
          example: "{column: C, unit: mg/L}",
        },
        csv,
      }),
    },
    temperature: {
      says: "Compensation of the raw reading for the temperature of the sample: reading / (1 + by * (T - to)), before anything else. Rows without a temperature count as missing.",
      example: "{column: T, unit: degC, to: 25 degC, by: 2 %/K}",
      shape: record({
        column: {
          shape: text,
          says: "The column of the same table that holds the temperature of the sample.",
          required: true,
          example: "T",
        },
        unit: { shape: text, says: "The unit of that column.", required: true, example: "degC" },
        to: {
          shape: quantity("temperature"),
          says: "The temperature that readings are brought to: that of the calibration.",
          required: true,
          example: "25 degC",
        },
        by: {
          shape: quantity(),
          says: "By what share the reading rises for each kelvin. About 2 %/K for salt in water (common practice); below zero for most dyes.",
          required: true,
          example: "2 %/K",
        },
      }),
    },
  }),
};

/** A table over time with every cleaning key: a reading, or a measured inlet. */
export const cleaning: Record<string, KeyShape> = {
  file: {
    shape: text,
    says: "The table as it was logged, a CSV file relative to this one. It is never edited: every step of cleaning is declared here.",
    example: "v3-salt.csv",
    snippet: "log.csv",
    needs: "time",
  },
  time: timeColumn,
  value: valueColumn,
  csv,
  calibration,
  baseline: {
    shape: choice("none", "constant", "drift"),
    says: "What lies under the signal: nothing, an offset, or an offset that drifts in a straight line. A fit estimates it beside the parameters; `moments` takes it from before the injection and after the tail.",
    default: "none",
  },
  line: {
    says: "Sample line and detector between the vessel and the reading. They are part of the model, not of the vessel.",
    example: "{delay: 0.3 min, lag: 0.1 min}",
    shape: record({
      delay: {
        shape: quantity("time"),
        says: "Time that the sample travels before it is read. A `±` makes it an unknown of the fit, held by that.",
        example: "0.3 min",
      },
      lag: {
        shape: quantity("time"),
        says: "Time constant of the detector, taken as a first-order lag.",
        example: "0.1 min",
      },
    }),
  },
  "leave-out": {
    says: "Stretches of time whose readings count for nothing, both ends included, each with its reason.",
    example: "[{from: 310 min, to: 320 min, because: air in the cell}]",
    shape: list(
      record({
        from: {
          shape: quantity("time"),
          says: "Start of the stretch: a time as the table writes it, or elapsed since its first row.",
          required: true,
          example: "310 min",
        },
        to: { shape: quantity("time"), says: "End of the stretch, written alike.", required: true, example: "320 min" },
        because: {
          shape: text,
          says: "Why these readings are not believed.",
          required: true,
          example: "air in the cell",
        },
      }),
    ),
  },
};
