// Command benchmark measures `bentray run` on a made-up survey of millions of
// points against the same closed formula in a columnar SQL engine, in one run
// on one machine.
//
// It writes the survey and its job file, builds bentray, installs the engine's
// npm package below the work folder, runs the two programs in turn, and prints
// their speed, CPU time and peak memory. Then it compares every column of both
// outputs on a sample of rows: a faster wrong answer is no answer. Without
// node, npm or the package, bentray alone is measured, on CSV alone (the engine
// makes the Parquet survey), and a message says so.
//
// `bentray diff` of the survey and its output is measured too, for its speed and
// memory, and must hold.
//
// Of the same points the engine also makes Parquet files of one giant row group
// and of giant pages. Only bentray is measured on them, for its memory, and its
// outputs are compared with the one of the ordinary file.
//
// What is counted: bentray's seconds are those of the whole process, with
// hashes, receipt and fsync. The engine's seconds are those of its query alone;
// start-up is left out, and it hashes nothing, syncs nothing and judges no
// outcomes. CPU time and peak memory are those of the whole process for both.
// Pending writes are flushed before each run, and no cache is dropped: the
// survey is read from memory where it fits. The programs take turns, so that what
// else the machine does meets both; the floors hold for the median times, and the
// best are shown beside them.
//
// The program exits with 1 where bentray is not fast enough, needs too much
// memory, or disagrees with the engine. It runs on Linux and macOS.
package main
