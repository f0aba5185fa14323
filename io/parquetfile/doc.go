// Package parquetfile copies a Parquet file while replacing its coordinates and
// adding columns: the cloud.Rewriter of that format.
//
// # What is copied and what is made
//
// Column chunks that do not change, and x, y, z on their way to their raw
// copies, pass through byte for byte, row group by row group, whatever their
// type, encoding and codec; only the footer's words about them are made anew.
// Only columns that are asked for are decoded, and only what is added is
// encoded. Row groups keep their rows; groups without rows are left out.
//
// # The way of the rows
//
// Next decodes the next piece of a row group, at most 64 Ki rows, page after
// page; pages of a column follow from one another, so this is work in order, and
// Decode has nothing left to do. It is not what a copy waits for: of 5 million
// points, eight columns decode in 0.35 s (snappy; 0.5 s zstd), and Put's writing
// with the caller's hash takes twice that, in order too. Encode makes one page
// of every new column. Put copies the old chunks at the first piece of a group
// and holds the new pages until the last one, because the chunks of a group
// cannot be woven.
//
// # Numbers and texts
//
// Numbers are read from flat DOUBLE, FLOAT, INT32, INT64 (signed and unsigned),
// BOOLEAN (0 and 1) and TIMESTAMP columns. A TIMESTAMP becomes seconds since
// 1970-01-01, UTC; one that is not adjusted to UTC ("local" in its type's name) is
// read as if it were. Null becomes NaN.
// INT64 beyond 2^53 is rounded to the nearest float64. Texts are read from flat
// BYTE_ARRAY columns; null becomes an empty text. Encodings: PLAIN, dictionary,
// RLE, DELTA_BINARY_PACKED, BYTE_STREAM_SPLIT, DELTA_LENGTH_BYTE_ARRAY and
// DELTA_BYTE_ARRAY, in data pages of version 1 and 2. Codecs: none, snappy,
// gzip, zstd. A column in another codec or type can be copied, not read.
//
// New columns are OPTIONAL. Numbers by row are PLAIN and not compressed: the low
// bits of a computed coordinate are noise, and snappy takes the time without
// taking the bytes. Columns by class are dictionaries with run lengths, a few
// bytes a page where all rows agree. So are labels by row: every row group has
// the dictionary of all names, and of each row as many bits as tell them apart.
//
// # Memory and damage
//
// The caps below bound every allocation by a file, whatever its headers say.
// Pages above spillBytes are decoded to a scratch file, one at a time in the
// whole process, and new pages above heldBytes wait in another. So pages take
// at most 128 MiB in the process (the giant one, as stored and as opened) and
// twice that until its memory is collected; a file 4 MiB for the page as stored,
// and for each column that is read 4 MiB for its page (16 MiB for indices of
// texts), the dictionary decoded and 32 MiB for texts on their way to a scratch
// file; a piece its numbers, 32 MiB of texts and its new pages; an output 32 MiB
// of new pages. Sizes are
// checked before anything is decompressed, by the codecs' own functions (the
// wrappers that come with the format's structures take no limit and fail on
// damaged gzip data by panic). A checksum is verified where a page has one,
// but not those of chunks that are merely copied.
//
// The format is that of the Apache Parquet specification, version 2.
package parquetfile

const (
	pieceRows = 64 << 10 // most rows of a chunk

	maxFooterBytes = 64 << 20 // footer as stored
	maxListItems   = 1 << 20  // elements of one list in footer or page header
	thriftBase     = 8 << 20  // memory of what is read of footer or page header, and
	thriftTimes    = 16       // so many times its bytes more
	maxHeaderBytes = 1 << 20  // header of one page
	maxPageBytes   = 64 << 20 // one page, compressed or not
	maxDictBytes   = 32 << 20 // one dictionary page, decompressed
	maxTextBytes   = 32 << 20 // texts of all columns in one piece
	maxIndexBytes  = 16 << 20 // one page of indices of texts
	maxSchemaItems = 1 << 16  // columns and groups of a schema
	maxDepth       = 32       // levels of a nested schema
	maxPathBytes   = 64 << 10 // name of a column, with those of its groups
	maxPathsBytes  = 16 << 20 // names of all columns

	textRows     = 256      // rows of texts that are decoded at a time
	cutTextBytes = 16 << 20 // texts of all columns with which a piece ends

	maxSpilledTexts = 1 << 30 // texts of one page in a scratch file

	spillBytes = 4 << 20  // size, compressed or not, above which a page goes to a scratch file
	heldBytes  = 32 << 20 // new pages of a row group that are kept in memory
)
