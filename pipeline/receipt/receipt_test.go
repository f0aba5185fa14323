package receipt

import (
	"context"
	"encoding/json"
	"errors"
	"fmt"
	"os"
	"path/filepath"
	"strings"
	"testing"
	"time"
)

// FIPS 180-4 examples (NIST, "Examples with Intermediate Values", SHA-256).
var published = []struct{ source, text, sum string }{
	{"NIST/abc", "abc", "ba7816bf8f01cfea414140de5dae2223b00361a396177a9cb410ff61f20015ad"},
	{"NIST/two blocks", "abcdbcdecdefdefgefghfghighijhijkijkljklmklmnlmnomnopnopq", "248d6a61d20638b8e5c026930c3e6039a33ce45964ff2167f6ecedd419db06c1"},
	{"NIST/empty", "", "e3b0c44298fc1c149afbf4c8996fb92427ae41e4649b934ca495991b7852b855"},
	{"NIST/a million a", strings.Repeat("a", 1e6), "cdc76e5c9914fb9281a1c7e284d73e67f1809a48a497200e046d39ccc7112cd0"},
}

func TestHash(t *testing.T) {
	for _, c := range published {
		t.Run(c.source, func(t *testing.T) {
			path := filepath.Join(t.TempDir(), "a")
			if err := os.WriteFile(path, []byte(c.text), 0o666); err != nil {
				t.Fatal(err)
			}
			if bytes, sum, err := Hash(t.Context(), path); err != nil || bytes != int64(len(c.text)) || sum != c.sum {
				t.Errorf("got %d bytes, %s, %v, want %d and %s", bytes, sum, err, len(c.text), c.sum)
			}
		})
	}
}

func TestHashEnds(t *testing.T) {
	path := filepath.Join(t.TempDir(), "a")
	if err := os.WriteFile(path, []byte("abc"), 0o666); err != nil {
		t.Fatal(err)
	}
	ctx, cancel := context.WithCancel(t.Context())
	cancel()
	if _, _, err := Hash(ctx, path); !errors.Is(err, context.Canceled) {
		t.Errorf("cancelled, it gives %v", err)
	}
	if _, _, err := Hash(t.Context(), path+"b"); !errors.Is(err, os.ErrNotExist) {
		t.Errorf("of a missing file it gives %v", err)
	}
}

func fingerprint(t *testing.T, settings string, calculation int, auxiliary ...Input) string {
	t.Helper()
	f, err := Fingerprint([]byte(settings), auxiliary, calculation)
	if err != nil {
		t.Fatal(err)
	}
	if len(f) != 64 || strings.Trim(f, "0123456789abcdef") != "" {
		t.Errorf("the fingerprint is %q, want 64 hex digits", f)
	}
	return f
}

func input(use, path, sum string) Input { return Input{use, File{path, 3, sum}} }

// What takes part changes the fingerprint, and nothing else does.
func TestFingerprint(t *testing.T) {
	flight := input("trajectory", "flight.csv", "aa")
	base := fingerprint(t, `{"a":1}`, 1, flight)
	for name, other := range map[string]string{
		"settings":           fingerprint(t, `{"a":2}`, 1, flight),
		"calculation":        fingerprint(t, `{"a":1}`, 2, flight),
		"content":            fingerprint(t, `{"a":1}`, 1, input("trajectory", "flight.csv", "ab")),
		"use":                fingerprint(t, `{"a":1}`, 1, input("extent", "flight.csv", "aa")),
		"no auxiliary file":  fingerprint(t, `{"a":1}`, 1),
		"one more":           fingerprint(t, `{"a":1}`, 1, flight, flight),
		"parted differently": fingerprint(t, `{"a":1}`, 1, input("trajectorya", "flight.csv", "a")),
	} {
		if other == base {
			t.Errorf("another %s gives the same fingerprint", name)
		}
	}
	if fingerprint(t, `{"a":1}`, 1, input("trajectory", "moved/flight.csv", "aa")) != base {
		t.Error("the place of an auxiliary file takes part")
	}
	if _, err := Fingerprint([]byte("{"), nil, 1); err == nil {
		t.Error("settings that are no JSON give no error")
	}
}

func TestWriteAndRead(t *testing.T) {
	output := filepath.Join(t.TempDir(), "a.csv")
	r := &Receipt{
		Run: strings.Repeat("ab", 32), Program: "p", Job: json.RawMessage(`{"k": 1}`), Inputs: []Input{input("cloud", "raw/a.csv", "aa")},
		Output: File{"a.csv", 7, "bb"}, RowsRead: 3, RowsWritten: 2, RowsDiverted: 1,
		Outcomes: map[string]int64{"dry": 2}, Ranges: map[string][2]float64{"depth": {1, 2.5}}, Cautions: []string{},
	}
	if err := r.Write(output); err != nil {
		t.Fatal(err)
	}
	got, err := Read(output)
	if err != nil {
		t.Fatal(err)
	}
	if want := `{"k":1}`; strings.Join(strings.Fields(string(got.Job)), "") != want {
		t.Errorf("the job is %s, want %s", got.Job, want)
	}
	got.Job, r.Job = nil, nil
	if fmt.Sprintf("%+v", got) != fmt.Sprintf("%+v", r) {
		t.Errorf("read %+v, want %+v", got, r)
	}
	if entries, _ := os.ReadDir(filepath.Dir(output)); len(entries) != 1 || entries[0].Name() != "a.csv.receipt.json" {
		t.Errorf("the folder holds %v", entries)
	}
}

func TestReadFaults(t *testing.T) {
	output := filepath.Join(t.TempDir(), "a.csv")
	if _, err := Read(output); !errors.Is(err, os.ErrNotExist) {
		t.Errorf("without a receipt it gives %v", err)
	}
	for text, want := range map[string]string{
		"{":                              "",
		`{"run": "ab", "approved": "x"}`: `json: unknown field "approved"`,
		"{}\n{}\n":                       "2 bytes behind its end",
	} {
		if err := os.WriteFile(output+Suffix, []byte(text), 0o666); err != nil {
			t.Fatal(err)
		}
		if _, err := Read(output); err == nil || !strings.HasPrefix(err.Error(), output+".receipt.json: not a receipt: "+want) {
			t.Errorf("%s gives %v, want %s", text, err, want)
		}
	}
}

// Rows of a summary add up over files, in whatever order they end.
func TestSummary(t *testing.T) {
	s := Summary{Started: time.Now().Add(-2 * time.Second), Outcomes: map[string]int64{}}
	s.Add(FileSummary{Output: "c.csv", Status: Failed, Error: "broken"}, nil)
	s.Add(FileSummary{Output: "b.csv", Status: Fresh, Rows: Rows{5, 4, 1}}, &Receipt{Outcomes: map[string]int64{"dry": 4}, Sensors: map[string]int64{"laser": 4, "images": 0, "sonar": 0}})
	s.Add(FileSummary{Output: "d.csv", Status: Dropped}, nil)
	s.Add(FileSummary{Output: "a.csv", Status: Done, Rows: Rows{3, 3, 0}}, &Receipt{Outcomes: map[string]int64{"dry": 1, "corrected": 2}, Sensors: map[string]int64{"laser": 2, "images": 1, "sonar": 0}})
	s.Close()
	if s.Done != 1 || s.Fresh != 1 || s.Failed != 1 || s.Dropped != 1 || (s.Rows != Rows{8, 7, 1}) {
		t.Errorf("counts are %+v", s)
	}
	if fmt.Sprint(s.Outcomes) != "map[corrected:2 dry:5]" {
		t.Errorf("outcomes are %v", s.Outcomes)
	}
	for i, want := range []string{"a.csv", "b.csv", "c.csv", "d.csv"} {
		if s.Files[i].Output != want {
			t.Errorf("file %d is %s, want %s", i, s.Files[i].Output, want)
		}
	}
	if s.Seconds < 1.9 || s.Seconds > 60 {
		t.Errorf("it took %g s, want about 2", s.Seconds)
	}
}
