// Package receipt holds the records that prove a run: the receipt beside every
// output file, the fingerprint of a run, and the summary of a run.
//
// A receipt holds no time and no machine name, so that equal work gives equal
// bytes. A summary holds both.
package receipt

import (
	"bytes"
	"context"
	"crypto/sha256"
	"encoding/hex"
	"encoding/json"
	"fmt"
	"io"
	"os"
	"path"

	"bentray/io/atomicfile"
)

// Suffix is what a receipt's name adds to its output's.
const Suffix = ".receipt.json"

// ShortLength is the number of hex digits of a fingerprint in the column run.
const ShortLength = 12

// Receipt says how one output file came about.
type Receipt struct {
	Run          string                `json:"run"` // fingerprint, see Fingerprint
	Program      string                `json:"program"`
	Job          json.RawMessage       `json:"job"`    // the settings that take part
	Inputs       []Input               `json:"inputs"` // the cloud first
	Output       File                  `json:"output"`
	RowsRead     int64                 `json:"rows_read"` // = rows_written + rows_diverted
	RowsWritten  int64                 `json:"rows_written"`
	RowsDiverted int64                 `json:"rows_diverted"`
	Outcomes     map[string]int64      `json:"outcomes"`          // those that occur
	Sensors      map[string]int64      `json:"sensors,omitempty"` // points by sensor, where the job names them
	Ranges       map[string][2]float64 `json:"ranges"`            // least and greatest over corrected points, in the units of the columns
	Cautions     []string              `json:"cautions"`
}

// File identifies a file's contents.
type File struct {
	Path   string `json:"path"` // with slashes; inputs relative to the job file, outputs to the output folder
	Bytes  int64  `json:"bytes"`
	SHA256 string `json:"sha256"`
}

// Input is a file that went into an output, and what it was used for: "cloud",
// "trajectory", "extent".
type Input struct {
	Use string `json:"use"`
	File
}

// Auxiliary returns the files that went in beside the cloud.
func (r *Receipt) Auxiliary() []Input { return r.Inputs[min(1, len(r.Inputs)):] }

// OtherName tells where the receipt's cloud has another name than its output, which
// keeps that of its cloud; it is empty where the names are the same.
func (r *Receipt) OtherName() string {
	cloud, output := path.Base(r.Inputs[0].Path), path.Base(r.Output.Path)
	if cloud == output {
		return ""
	}
	return fmt.Sprintf("the receipt has the raw cloud as %q, want the output's name %q", r.Inputs[0].Path, output)
}

// Write puts the receipt beside its output, whole or not at all.
func (r *Receipt) Write(outputPath string) error {
	return writeJSON(outputPath+Suffix, r)
}

// Read returns the receipt of an output file. A key that is none is an error, since
// nothing would hold what it says.
func Read(outputPath string) (*Receipt, error) {
	data, err := os.ReadFile(outputPath + Suffix)
	if err != nil {
		return nil, err
	}
	var r Receipt
	d := json.NewDecoder(bytes.NewReader(data))
	d.DisallowUnknownFields()
	if err := d.Decode(&r); err != nil {
		return nil, fmt.Errorf("%s%s: not a receipt: %w", outputPath, Suffix, err)
	}
	if rest := bytes.TrimSpace(data[d.InputOffset():]); len(rest) > 0 {
		return nil, fmt.Errorf("%s%s: not a receipt: %d bytes behind its end", outputPath, Suffix, len(rest))
	}
	return &r, nil
}

// Fingerprint identifies what a run does to any cloud: the settings that take
// part, the contents of the auxiliary files (each with its use), and the
// version of the calculation. It is 64 hex digits.
func Fingerprint(settings []byte, auxiliary []Input, calculation int) (string, error) {
	type content struct{ Use, SHA256 string }
	contents := []content{}
	for _, a := range auxiliary {
		contents = append(contents, content{a.Use, a.SHA256})
	}
	all, err := json.Marshal(struct {
		Settings    json.RawMessage
		Auxiliary   []content
		Calculation int
	}{settings, contents, calculation})
	if err != nil {
		return "", err
	}
	sum := sha256.Sum256(all)
	return hex.EncodeToString(sum[:]), nil
}

// Hash reads a file to its end, unless the context ends before, and returns its
// size and SHA-256.
func Hash(ctx context.Context, path string) (bytes int64, sum string, err error) {
	f, err := os.Open(path)
	if err != nil {
		return 0, "", err
	}
	defer f.Close()
	h := sha256.New()
	buffer := make([]byte, 1<<18)
	for {
		n, err := f.Read(buffer)
		h.Write(buffer[:n])
		bytes += int64(n)
		if err == io.EOF {
			return bytes, hex.EncodeToString(h.Sum(nil)), nil
		}
		if err == nil {
			err = ctx.Err()
		}
		if err != nil {
			return bytes, "", err
		}
	}
}

func writeJSON(path string, v any) error {
	data, err := json.MarshalIndent(v, "", "  ")
	if err != nil {
		return err
	}
	return atomicfile.Write(path, append(data, '\n'))
}
