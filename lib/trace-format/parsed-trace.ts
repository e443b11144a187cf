/** What reading a text file gives, beside its numbers. */

export type Encoding = 'utf-8' | 'utf-16le' | 'utf-16be' | 'windows-1252';
export type Delimiter = ',' | ';' | '\t' | ' ';
export type DecimalMark = '.' | ',';

/** How the file was read. Every field was decided from the file's own first block, and `decided` says so in a sentence. */
export type TextDialect = {
  encoding: Encoding;
  byteOrderMark: boolean;
  delimiter: Delimiter;
  decimal: DecimalMark;
  decided: string;
};

export type Direction = 'increasing' | 'decreasing' | 'neither';

export type ParsedColumn = {
  /** Header text exactly as in the file, without quotation marks and byte order mark; `column 3` where there is none. */
  header: string;
  /** The quantity without its unit: `V_exit` of `V_exit [mV]`. */
  name: string;
  /** A name that expressions can use, unique within the file. */
  symbol: string;
  /** Unit as the file writes it, null where the file does not state one. Not checked here. */
  unit: string | null;
  /** True where the column holds words instead of numbers: its samples are all missing. */
  text: boolean;
  missing: number;
  /** Smallest and largest sample, null where every sample is missing. */
  min: number | null;
  max: number | null;
  /** Order of the samples; a column with a missing sample has none. Equal neighbours are allowed. */
  direction: Direction;
};

export type ParsedTrace = {
  dialect: TextDialect;
  /** Comment lines and lines above the header as in the file, without their line ends. */
  comments: string[];
  /** True where there were more comment lines than are kept. */
  commentsCut: boolean;
  columns: ParsedColumn[];
  rows: number;
  /** Sentences about what was decided or left out. */
  notes: string[];
};

/** A file that cannot be read as a table of numbers. The message is for the person who attached it. */
export class TraceFormatError extends Error {
  /** Line of the file, counted from 1, where there is one to point at. */
  readonly line: number | null;

  constructor(message: string, line: number | null = null) {
    super(message);
    this.name = 'TraceFormatError';
    this.line = line;
  }
}
