// Runs SQL in a columnar engine and prints the rows. Standard input holds a
// JSON list of statements; standard output gets, for each, a JSON list of rows,
// every value as text. The folder that holds the engine's node_modules is named
// by BENTRAY_ENGINE.
import { createRequire } from 'node:module';
import { readFileSync } from 'node:fs';
import { join } from 'node:path';

const folder = process.env.BENTRAY_ENGINE;
if (!folder) {
  console.error('BENTRAY_ENGINE is not set, want the folder where npm installed @duckdb/node-api');
  process.exit(64);
}
const { DuckDBInstance } = createRequire(join(folder, 'package.json'))('@duckdb/node-api');

const instance = await DuckDBInstance.create(':memory:', { threads: '2' });
const connection = await instance.connect();
const results = [];
for (const sql of JSON.parse(readFileSync(0, 'utf8'))) {
  try {
    const reader = await connection.runAndReadAll(sql);
    results.push(reader.getRows().map(row => row.map(String)));
  } catch (error) {
    console.error(`${sql}\n${error.message}`);
    process.exit(1);
  }
}
console.log(JSON.stringify(results));
