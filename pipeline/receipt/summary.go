package receipt

import (
	"cmp"
	"encoding/json"
	"fmt"
	"maps"
	"os"
	"slices"
	"time"
)

// Summary says what one run did to all its files. Unlike a receipt it holds
// times and the machine's name.
type Summary struct {
	Run      string           `json:"run"`
	Program  string           `json:"program"`
	Title    string           `json:"title,omitempty"`
	Job      string           `json:"job"` // the job file's path, relative to the output folder
	Host     string           `json:"host"`
	Shard    string           `json:"shard,omitempty"` // I/N
	Workers  int              `json:"workers"`
	Started  time.Time        `json:"started"`
	Finished time.Time        `json:"finished"`
	Seconds  float64          `json:"seconds"`
	LeftOut  int              `json:"left_out"` // matches of the patterns that are outputs of earlier runs
	Files    []FileSummary    `json:"files"`    // in order of their outputs
	Done     int              `json:"files_done"`
	Fresh    int              `json:"files_fresh"` // done by an earlier run, and still right
	Failed   int              `json:"files_failed"`
	Dropped  int              `json:"files_not_done"` // interrupted
	Rows     Rows             `json:"rows"`           // over the files that are done
	Outcomes map[string]int64 `json:"outcomes"`
	Sensors  map[string]int64 `json:"sensors,omitempty"`  // points by sensor, where the job names them
	Cautions []string         `json:"cautions,omitempty"` // of the files together; each has its own
}

// Rows counts rows. Read = Written + Diverted.
type Rows struct {
	Read     int64 `json:"read"`
	Written  int64 `json:"written"`
	Diverted int64 `json:"diverted"`
}

// Status is what became of one file.
type Status string

// What can become of a file.
const (
	Done    Status = "done"
	Fresh   Status = "fresh"
	Failed  Status = "failed"
	Dropped Status = "not_done"
)

// FileSummary is what one run did to one file.
type FileSummary struct {
	Input    string   `json:"input"`
	Output   string   `json:"output"`
	Status   Status   `json:"status"`
	Error    string   `json:"error,omitempty"`
	Rows     Rows     `json:"rows"`
	Cautions []string `json:"cautions,omitempty"`
	Seconds  float64  `json:"seconds"`

	// The input of a file that is done or fresh.
	InputBytes    int64     `json:"input_bytes,omitempty"`
	InputSHA256   string    `json:"input_sha256,omitempty"`
	InputModified time.Time `json:"input_modified,omitzero"`
}

// ReadSummary reads a summary that Write wrote.
func ReadSummary(path string) (*Summary, error) {
	data, err := os.ReadFile(path)
	if err != nil {
		return nil, err
	}
	var s Summary
	if err := json.Unmarshal(data, &s); err != nil {
		return nil, fmt.Errorf("%s: not a summary: %w", path, err)
	}
	return &s, nil
}

// Add takes the result of one file into the summary, with the receipt of one that is
// done or fresh, else nil.
func (s *Summary) Add(f FileSummary, r *Receipt) {
	s.Files = append(s.Files, f)
	switch f.Status {
	case Done:
		s.Done++
	case Fresh:
		s.Fresh++
	case Failed:
		s.Failed++
	case Dropped:
		s.Dropped++
	}
	s.Rows.Read += f.Rows.Read
	s.Rows.Written += f.Rows.Written
	s.Rows.Diverted += f.Rows.Diverted
	if r == nil {
		return
	}
	for name, n := range r.Outcomes {
		s.Outcomes[name] += n
	}
	for name, n := range r.Sensors {
		if s.Sensors == nil {
			s.Sensors = map[string]int64{}
		}
		s.Sensors[name] += n
	}
}

// Close sets the end of the run, brings the files into order, and cautions of sensors
// that have no point in any of them.
func (s *Summary) Close() {
	for _, name := range slices.Sorted(maps.Keys(s.Sensors)) {
		if s.Sensors[name] == 0 {
			s.Cautions = append(s.Cautions, fmt.Sprintf("sensor %q fits no point of these files", name))
		}
	}
	s.Finished = time.Now().UTC().Truncate(time.Millisecond)
	s.Seconds = s.Finished.Sub(s.Started).Seconds()
	slices.SortFunc(s.Files, func(a, b FileSummary) int { return cmp.Compare(a.Output, b.Output) })
}

// Write puts the summary at the path, whole or not at all.
func (s *Summary) Write(path string) error {
	return writeJSON(path, s)
}
