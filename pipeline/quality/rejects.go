package quality

import (
	"bytes"
	"encoding/csv"
	"errors"
	"fmt"
	"hash/maphash"
	"io"
	"io/fs"
	"os"
	"strconv"

	"bentray/io/cloud"
)

// rejects are the rows that a corrected file does not have because they could not be
// read, as the file beside it lists them.
type rejects struct {
	lines []int64  // rising
	texts []uint64 // hashes
	seen  int      // found in the raw cloud
}

// readRejects reads NAME.rejects.csv; without that file there are none.
func readRejects(corrected string) (*rejects, error) {
	path := corrected + rejectsSuffix
	file, err := os.Open(path)
	if errors.Is(err, fs.ErrNotExist) {
		return &rejects{}, nil
	}
	if err != nil {
		return nil, err
	}
	defer file.Close()
	rows := csv.NewReader(file)
	rows.FieldsPerRecord, rows.ReuseRecord = 3, true
	if _, err := rows.Read(); err != nil {
		return nil, fmt.Errorf("%s: %w", path, err)
	}
	r := &rejects{}
	for {
		row, err := rows.Read()
		if err == io.EOF {
			return r, nil
		}
		if err != nil {
			return nil, fmt.Errorf("%s: %w", path, err)
		}
		line, err := strconv.ParseInt(row[0], 10, 64)
		if err != nil || len(r.lines) > 0 && line <= r.lines[len(r.lines)-1] {
			return nil, fmt.Errorf("%s: line is %q, want a number above the one before", path, row[0])
		}
		r.lines, r.texts = append(r.lines, line), append(r.texts, textHash([]byte(row[2])))
	}
}

// textHash is that of a row's text; line breaks within are as encoding/csv reads them.
func textHash(text []byte) uint64 {
	return maphash.Bytes(seed, bytes.ReplaceAll(text, []byte("\r\n"), []byte("\n")))
}

// take compares what a chunk of the raw cloud passed over, in order.
func (r *rejects) take(rows []cloud.Reject, f *findings) {
	for _, row := range rows {
		if row.Reason != "" {
			f.addf(KindDropped, "line %d of the raw cloud %s; it is neither here nor in the rejects", row.Line, row.Reason)
			continue
		}
		for r.seen < len(r.lines) && r.lines[r.seen] < row.Line {
			r.strange(f)
		}
		if r.texts[r.seen] != textHash(row.Text) {
			f.addf(KindRejects, "line %d of the raw cloud is not what the rejects have of it", row.Line)
		}
		r.seen++
	}
}

// strange notes a reject that is no row of the raw cloud.
func (r *rejects) strange(f *findings) {
	f.addf(KindRejects, "the rejects have line %d, where no row of the raw cloud begins", r.lines[r.seen])
	r.seen++
}

// end notes what was not seen until the end.
func (r *rejects) end(f *findings) {
	for r.seen < len(r.lines) {
		r.strange(f)
	}
}
