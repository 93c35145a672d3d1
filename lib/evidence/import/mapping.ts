/** How a table's columns are to be read. Everything is declared by the person who uploads; nothing is guessed. */
export type ImportMapping = {
  delimiter: ',' | ';' | '\t' | '|';
  decimalMark: '.' | ',';
  timeColumn: string;
  timeKind: 'elapsed' | 'date and clock';
  /** Unit of elapsed times (UCUM). */
  timeUnit?: TimeUnit;
  /** IANA zone of dates and clock times. */
  timeZone?: string;
  /** Pattern of dates and clock times, such as `dd.MM.yyyy HH:mm`; ISO 8601 when left out. */
  dateFormat?: string;
  valueColumns: ValueColumn[];
  /** Cells that mean "not measured", compared without case; an empty cell always does. */
  missingMarks?: string[];
  /** Leading mark of values below the limit of detection, such as `<` in `<0.05`. */
  belowLimitMark?: string;
};

export type ValueColumn = {
  column: string;
  readout: string;
  unit?: string;
  /** The stored value is the cell times this factor (default 1). */
  factor?: number;
};

export const TIME_UNITS = {
  ms: 1 / 60_000,
  s: 1 / 60,
  min: 1,
  h: 60,
  d: 1440,
  wk: 10_080,
} as const;
export type TimeUnit = keyof typeof TIME_UNITS;

export type ImportedReading = {
  /** Row in the file, the header being row 1. */
  row: number;
  /** Minutes since the setting for elapsed times, an ISO 8601 instant (UTC) otherwise. */
  time: number | string;
  readout: string;
  unit?: string;
  value: number | null;
  state: 'value' | 'missing' | 'below limit';
  /** The limit of detection, where the state is "below limit". */
  limit?: number;
};

export type ImportProblem = {
  /** 0 where the trouble is the file or the mapping. */
  row: number;
  column: string;
  /** The cell as it stands in the file. */
  text: string;
  reason: string;
  mend: string;
};

export type ImportResult = {
  rows: ImportedReading[];
  problems: ImportProblem[];
  columns: string[];
  counts: {
    dataRows: number;
    readings: number;
    values: number;
    missing: number;
    belowLimit: number;
    problems: number;
    duplicates: number;
  };
};
