// Package quality compares a corrected cloud with its raw one, and with surveyed
// points: it proves that nothing was lost and nothing changed that should not, and
// shows what the correction did and how far it can be trusted.
//
// # What is proven
//
// Every row of the raw cloud is there once, in its place (or in NAME.rejects.csv);
// every column of the raw cloud is there under its name, in its place and type, with
// the same values; the raw copies hold the raw coordinates. CSV fields are compared
// as they stand in the file, byte for byte. Parquet columns are compared as stored,
// whole column chunks at a time, so that nested and unknown types are compared too;
// chunks that differ are compared by value, a null and a NaN by their bits. Of nested
// columns and values of fixed length that is not done: the report says that they cannot
// be compared. Points that are not corrected repeat their raw coordinates, and depth is
// water_level minus z. Where a point belongs by its ray is not computed here.
//
// Rows belong together by their order. Where raw coordinates differ, some 500 rows are
// looked ahead to tell a row that was dropped, doubled, inserted or swapped from one
// that changed. The first findings of a file are kept, all are counted.
//
// # Figures
//
// Shifts are corrected minus raw, over points with the outcome corrected; of two
// corrected clouds, second minus first over those that both corrected. Bands hold
// [from, to), and their width is a round number. A residual is corrected minus check;
// its depth is the water level at the nearest corrected point minus the check point's
// height. A check point is matched among the corrected points within reach: by a plane
// (geo.LocalPlane, through the nearest 500 at most, fewer where there are very many check
// points), or the nearest of them. TVU limits are in metres, and residuals in other
// units are converted.
//
// # Memory
//
// Files are read in chunks, and every figure has a bound of its own: 4096 bins, 256 by
// 256 cells, 65 536 sampled points, a million neighbours of check points, 131 072 cells
// of flight lines. Figures do not depend on the number of workers.
package quality
