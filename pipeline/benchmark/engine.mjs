// The engine's side of the benchmark: the closed formula for one level in SQL.
//
//   node engine.mjs '{"do": "correct", "format": "csv", "input": ..., "output": ..., "threads": 2, "setting": {...}}'
//
// "convert" turns the survey from CSV into Parquet, in row groups of about
// "groupRows" rows where that is given; "sample" writes every "every"-th row of
// a Parquet file and its last one as CSV. Prints {"seconds": of the query}.
//
// What is made easy for the engine: the types of all columns are given, so
// nothing is sniffed; columns that are only copied are read and written as text;
// everything constant is a literal; lengths become DECIMAL where the output is
// text (cheaper here than rounded doubles, and the files of both programs get
// about the same size); only the query is timed.
// What it does not do: hash input and output, sync the output to disk, write a
// receipt, judge outcomes (it takes every point as corrected), keep the raw text
// of the coordinates.
import { DuckDBInstance } from "@duckdb/node-api";

const call = JSON.parse(process.argv[2]);
const quote = (text) => `'${text.replaceAll("'", "''")}'`;

const types = {
  x: "DOUBLE", y: "DOUBLE", z: "DOUBLE", gps_time: "DOUBLE",
  intensity: "INTEGER", return_number: "INTEGER", classification: "INTEGER",
  origin_x: "DOUBLE", origin_y: "DOUBLE", origin_z: "DOUBLE",
};

const copied = new Set(["gps_time", "intensity", "return_number", "classification"]);

function csvSource(path, typeOf) {
  const columns = Object.keys(types).map((name) => `${name}: '${typeOf(name)}'`).join(", ");
  return `read_csv(${quote(path)}, auto_detect = false, header = true, delim = ',', quote = '"', escape = '"', ` +
    `columns = {${columns}})`;
}

// Text that is only copied is not parsed.
const source = (path, format) => format === "parquet"
  ? `read_parquet(${quote(path)})`
  : csvSource(path, (name) => copied.has(name) ? "VARCHAR" : types[name]);

// Parquet keeps doubles as they are computed; text gets the decimals of the job's defaults.
const decimals = (format, places) => (value) =>
  format === "csv" ? `CAST(${value} AS DECIMAL(18, ${places}))` : value;

function correction(path, format, s) {
  const length = decimals(format, 4), angle = decimals(format, 5);
  return `
WITH ray AS (
  SELECT *, origin_x - x AS dx, origin_y - y AS dy, origin_z - z AS dz, (${s.level} - z) / (origin_z - z) AS t
  FROM ${source(path, format)}
), air AS (
  SELECT *, sqrt(dx * dx + dy * dy) AS plan, sqrt(dx * dx + dy * dy + dz * dz) AS range FROM ray
), water AS (
  SELECT *, plan / range AS sin_air, plan / range * ${s.n_air / s.n_water} AS sin_water,
    t * range * ${s.ng_air / s.ng_water} AS path FROM air
), point AS (
  SELECT *, path * sqrt(1 - sin_water * sin_water) AS below, t - path * ${s.n_air / s.n_water} / range AS back FROM water
)
SELECT ${length("x + back * dx")} AS x, ${length("y + back * dy")} AS y, ${length(`${s.level} - below`)} AS z,
  gps_time, intensity, return_number, classification, origin_x, origin_y, origin_z,
  x AS x_raw, y AS y_raw, z AS z_raw,
  ${length("below")} AS depth, ${s.level} AS water_level, ${s.level} AS entry_level,
  ${s.slope} AS slope_x, ${s.slope} AS slope_y,
  'corrected' AS outcome, 'pulse' AS model, 1 AS ray_count, CAST(NULL AS VARCHAR) AS view_source,
  ${angle("degrees(asin(sin_air))")} AS incidence_deg, ${angle("degrees(asin(sin_water))")} AS refraction_deg,
  ${s.n_air} AS n_air, ${s.n_water} AS n_water, ${s.ng_air} AS ng_air, ${s.ng_water} AS ng_water,
  ${s.temperature} AS temperature, ${s.salinity} AS salinity, 'job' AS water_source, '${s.run}' AS run
FROM point`;
}

const into = {
  csv: "(FORMAT csv, HEADER true)",
  parquet: "(FORMAT parquet)",
};

const converted = call.groupRows ? `(FORMAT parquet, ROW_GROUP_SIZE ${call.groupRows})` : into.parquet;

const statements = {
  correct: () => `COPY (${correction(call.input, call.format, call.setting)}) TO ${quote(call.output)} ${into[call.format]}`,
  convert: () => `COPY (SELECT * FROM ${csvSource(call.input, (name) => types[name])}) TO ${quote(call.output)} ${converted}`,
  sample: () => `COPY (
    SELECT * EXCLUDE file_row_number FROM read_parquet(${quote(call.input)}, file_row_number = true)
    WHERE file_row_number % ${call.every} = 0 OR file_row_number = (SELECT count(*) - 1 FROM read_parquet(${quote(call.input)}))
    ORDER BY file_row_number
  ) TO ${quote(call.output)} ${into.csv}`,
};

const instance = await DuckDBInstance.create(":memory:", { threads: String(call.threads) });
const connection = await instance.connect();
const started = performance.now();
await connection.run(statements[call.do]());
console.log(JSON.stringify({ seconds: (performance.now() - started) / 1000 }));
