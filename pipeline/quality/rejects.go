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
	"slices"
	"strconv"
	"strings"

	"bentray/io/cloud"
	"bentray/io/csvfile"
	"bentray/pipeline/job"
)

// rejects are the rows that a corrected file does not have because they could not be
// read, as the file beside it lists them.
type rejects struct {
	lines   []int64  // rising
	texts   []uint64 // hashes
	reasons []string
	seen    int // found in the raw cloud

	raw      *csvfile.File // the raw cloud, set where there are rejects of it
	numbers  []int         // its columns that may be read as numbers
	views    string        // its column of cameras, whose ids are not looked at; or empty
	unproven int64         // rows diverted for that
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
		r.lines, r.texts, r.reasons = append(r.lines, line), append(r.texts, textHash([]byte(row[2]))), append(r.reasons, strings.Clone(row[1]))
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
		switch reason := r.reasons[r.seen]; {
		case r.texts[r.seen] != textHash(row.Text):
			f.addf(KindRejects, "line %d of the raw cloud is not what the rejects have of it", row.Line)
		case r.isFault(row, reason):
		case r.views != "" && strings.HasPrefix(reason, r.views+" "):
			r.unproven++
		default:
			f.addf(KindRejects, "line %d of the raw cloud is among the rejects, yet it is not so that it %s", row.Line, reason)
		}
		r.seen++
	}
}

// isFault tells whether a row cannot be read for the reason given.
func (r *rejects) isFault(row cloud.Reject, reason string) bool {
	if r.raw.Fault(row) == reason {
		return true
	}
	return slices.ContainsFunc(r.numbers, func(column int) bool { return r.raw.Fault(row, column) == reason })
}

// prove makes ready to look at why rows were diverted from the raw cloud: the columns
// that the job of the receipt may read as numbers; all where there is none.
func (r *rejects) prove(raw *csvfile.File, made *provenance, f *findings) {
	r.raw = raw
	columns := raw.Columns()
	if made == nil {
		for i := range columns {
			r.numbers = append(r.numbers, i)
		}
		return
	}
	in := made.job.Input
	if len(r.lines) > 0 && in.BadRows != job.Divert {
		f.addf(KindRejects, "there are rejects, but the job of the receipt stops where a row cannot be read")
	}
	for _, name := range made.numbers() {
		if i, err := cloud.FindRole(columns, name, in.Columns); err == nil && i >= 0 {
			r.numbers = append(r.numbers, i)
		}
	}
	isMultiview := func(s job.Sensor) bool { return s.Rays.Model == job.Multiview }
	if i, err := cloud.FindRole(columns, "views", in.Columns); err == nil && i >= 0 && slices.ContainsFunc(made.job.Sensors, isMultiview) {
		r.views = columns[i].Name
	}
}

// numbers names the columns that the job may read as numbers.
func (p *provenance) numbers() []string {
	list := []string{"x", "y", "z", "gps_time", "origin_x", "origin_y", "origin_z", p.job.Surface.Column}
	where := []map[string][]any{p.job.Select.Where}
	for _, s := range p.job.Sensors {
		where = append(where, s.Where)
	}
	isText := func(v any) bool { _, is := v.(string); return is }
	for _, columns := range where {
		for name, values := range columns {
			if !slices.ContainsFunc(values, isText) {
				list = append(list, name)
			}
		}
	}
	return list
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
