// Makes the files of this folder with the columnar SQL engine DuckDB 1.5.6. The
// folder that holds the engine's node_modules is named by BENTRAY_ENGINE:
//   BENTRAY_ENGINE=/somewhere node make.mjs
import { createRequire } from 'node:module';
import { dirname, join } from 'node:path';
import { fileURLToPath } from 'node:url';

const { DuckDBInstance } = createRequire(join(process.env.BENTRAY_ENGINE, 'package.json'))('@duckdb/node-api');
const here = dirname(fileURLToPath(import.meta.url));
const connection = await (await DuckDBInstance.create(':memory:', { threads: '1' })).connect();

// A made-up cloud of 2500 points: hashes serve for noise, so that every run
// makes the same values.
await connection.run(`create table points as select
  round(4000 + 0.5 * i + (hash(i) % 1000) / 1e3, 3)::double as x,
  case when i % 41 = 7 then null else (7000 + hash(i + 1) % 900 / 8)::double end as y,
  case when i % 97 = 5 then 'nan'::double when i % 53 = 9 then null else -((hash(i + 2) % 12000)::double / 1000) end as z,
  timestamp '2024-05-01 10:00:00' + to_microseconds((i * 12345)::bigint) as time_us,
  (timestamp '2024-05-01 10:00:00' + to_microseconds((i * 1000000)::bigint))::timestamp_ms as time_ms,
  make_timestamp_ns(1714557600000000000 + i * 1000000007) as time_ns,
  (hash(i + 3) % 65536)::usmallint as intensity,
  (hash(i + 4) % 5)::utinyint as classification,
  (i * 7919 - 9000000)::integer as offset_mm,
  (hash(i + 5) % 1000000007)::bigint * 1000003 as serial,
  (hash(i + 6) % 4096 / 16)::float as scan_angle,
  hash(i + 7) % 2 = 0 as edge,
  case when i % 29 = 3 then null else 'cam' || hash(i + 8) % 9 || ';cam' || hash(i + 9) % 9 end as views,
  'point ' || i || ' é' as note,
  (i / 100)::decimal(9, 2) as cost,
  [i, i + 1] as list
  from range(2500) r(i)`);

const flat = 'select * exclude (list) from points';
const files = {
  'none.parquet': `(${flat}) to 'FILE' (format parquet, compression uncompressed, row_group_size 2048)`,
  'snappy.parquet': `(${flat}) to 'FILE' (format parquet, compression snappy, row_group_size 2048)`,
  'gzip.parquet': `(${flat}) to 'FILE' (format parquet, compression gzip, row_group_size 2048)`,
  'zstd.parquet': `(${flat}) to 'FILE' (format parquet, compression zstd, row_group_size 2048)`,
  'v2.parquet': `(${flat}) to 'FILE' (format parquet, compression snappy, parquet_version v2, row_group_size 2048)`,
  'plain.parquet': `(${flat}) to 'FILE' (format parquet, compression snappy, dictionary_size_limit 1, row_group_size 2048)`,
  'nested.parquet': `(select * from points limit 100) to 'FILE' (format parquet, compression snappy)`,
  'lz4.parquet': `(${flat} limit 20) to 'FILE' (format parquet, compression lz4_raw)`,
};
for (const [name, sql] of Object.entries(files)) {
  await connection.run(`copy ${sql.replace('FILE', join(here, name))}`);
}
await connection.run(`copy (select x, y, z, epoch_us(time_us) time_us, epoch_ms(time_ms) time_ms, epoch_ns(time_ns) time_ns,
  intensity, classification, offset_mm, serial, scan_angle, edge::integer edge, views, note from points)
  to '${join(here, 'points.csv')}' (header)`);
