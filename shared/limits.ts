/**
 * Every bound of the product, named once. Schemas, columns, forms and messages read them from here,
 * so that a limit changed here changes everywhere at the same time.
 */
export const limits = {
  /** Resolution of a converter, bits (solver.md section 1). */
  converterBitsMin: 4,
  converterBitsMax: 24,
  /** Span and ends of a range, V: inside them no square of a voltage leaves the doubles. */
  rangeSpanMinV: 1e-9,
  rangeEndMaxV: 1e6,
  /** Resolution of an auxiliary DAC, bits. */
  sourceBitsMin: 1,
  sourceBitsMax: 24,
  channelsMax: 64,
  channelNameMax: 16,
  rangesMax: 16,
  rangeIdMax: 16,
  labelMax: 120,
  titleMax: 120,
  designKeyMax: 32,
  lotKeyMax: 32,
  serialMax: 64,
  /** Serials that a lot may expect. */
  lotExpectedMax: 20_000,
  stationNameMax: 64,
  personNameMax: 80,
  tokenNameMax: 64,
  budgetLinesMax: 10_000,
  planPointsMax: 1_000,
  /** Points of one measurement, and readings of one point. */
  pointsMax: 4_096,
  readingsMax: 1_000,
  noteMax: 500,
  reasonMin: 10,
  reasonMax: 500,
  findingMax: 2_000,
  instrumentIdMax: 32,
  instrumentTitleMax: 80,
  /** A calibration due within so many days is said to be due soon. */
  calibrationSoonDays: 30,
  idempotencyKeyMax: 128,
  /** A bigger points CSV belongs to `ogee batch`. Bytes. */
  benchCsvMaxBytes: 10 * 1024 * 1024,
  /** One JSON request body, and one block of a batch. Bytes. */
  bodyMaxBytes: 1024 * 1024,
  batchMaxLines: 1_000,
  batchMaxBytes: 8 * 1024 * 1024,
  pageDefault: 50,
  pageMax: 500,
  /** Values of one filter of History, and their text in an address. */
  filterValuesMax: 20,
  filterTextMax: 1_000,
  /** More matching records than this are not counted, and units beginning with a text not told one by one. */
  countMax: 100_000,
  unitsByTextMax: 500,
  /** A cell with arithmetic. Characters. */
  expressionMax: 200,
  passwordMin: 12,
  passwordMax: 1_024,
  emailMax: 254,
  tokenDaysDefault: 90,
  tokenDaysMax: 366,
  /** For rotation: the old and the new one (asvs.md). */
  liveTokensPerStation: 2,
  sessionIdleMinutes: 60,
  sessionAbsoluteHours: 12,
  clockSkewNoticeSeconds: 120,
} as const
