// Package csvfile reads and rewrites point clouds held as delimited text: it is
// the CSV format behind cloud.Rewriter.
//
// # Dialect
//
// Columns are separated by commas, semicolons, tabs or blanks (runs of spaces
// and tabs). The separator is found from the first row and up to 19 rows behind
// it. A candidate must part the first row in two fields at least; its score is
// the number of those rows with as many fields as the first and no quote within
// a field, times that number of fields, so that neither one ragged row nor a
// stray comma in a text decides. Blanks count only where no other candidate holds for most of the
// rows, since texts have blanks too. Equal scores go to the first of comma,
// semicolon, tab. Where Options.Names says how many fields there are, candidates
// that give the first row that many are preferred.
//
// Double quotes stand around a whole field, blanks outside them allowed;
// separators and line breaks inside are text, and a doubled quote inside stands
// for one. A quote elsewhere, as in 5" pipe, opens nothing and makes its row a
// bad one; a header with one is refused. Where a quoted field goes on behind its
// closing quote, all lines up to there belong to the bad row.
//
// Lines end in LF or CR LF, each row as it likes; the last row may lack its line
// end. Lines that begin with # or // before the header, empty lines everywhere
// and a UTF-8 byte order mark are kept as they stand; none of them is a row. In
// a file separated by blanks, a line of nothing but blanks is empty too.
// Names ending in .gz and .zst are read and written compressed.
//
// # Output
//
// The header and every row keep their bytes, but for the fields x, y and z of
// moved rows; behind them come the raw texts of x, y and z and the added
// columns, in the input's separator (one space for blanks). Labels stand in
// quotes where they need them. Missing values are empty, "" where blanks
// separate. A row keeps its line end. With Options.Names the output gains a
// header line, because the added columns need names.
//
// # Numbers
//
// A number is decimal, with or without exponent, sign, blanks and quotes around
// it; an empty field is NaN, and the words nan, inf and infinity are taken in
// any letter case. It is read to the nearest double. Anything else makes the
// row a bad one. Written numbers have fixed decimals: v*10^d, itself rounded to
// a double, is rounded half away from zero to a whole number; beyond 2^53 the
// exact value of v is rounded instead. Zero has no sign.
//
// # Limits
//
// Memory goes by blocks of about a mebibyte and of 32768 rows at most. A row of
// more than 16 MiB is refused: as a rule a quote was never closed. So is a zstd
// window above 64 MiB.
package csvfile
