// Package cloud says what a point cloud is to the rest of the program,
// whatever its file format: named columns, the roles some of them play, and
// chunks of rows that pass through a Rewriter.
//
// A Rewriter copies a file while replacing its coordinates and adding columns.
// Its work on a chunk is split in four, so that a file is read and written in
// order while everything dear runs side by side:
//
//	Next    in order       takes the next rows from the input
//	Decode  side by side   turns the wanted columns into slices
//	Encode  side by side   turns the results into the output's bytes
//	Put     in order       appends them to the output
//
// A format lives in a package of its own (csvfile) and knows nothing of
// refraction: rows carry a class (one small number a row, the caller's own),
// and a layout says which text or number each class gets in which added column.
//
// Numbers are handed over as they stand in the file, in the file's own units;
// an empty field or null is NaN.
package cloud
