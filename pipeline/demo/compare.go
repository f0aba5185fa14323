package demo

import (
	"encoding/csv"
	"errors"
	"fmt"
	"io"
	"os"
	"slices"
	"strconv"

	"bentray/io/parquetfile"
)

// RoundingM is the most that the rounding of the tiles to millimetres leaves of
// an error, in m: half a millimetre in x and y is 0.71 mm in plan, and the last
// decimals of output and truth come on top; half a millimetre in z is 0.67 mm where
// the index of water multiplies it, and some more where all images look from one side.
const RoundingM = 0.001

// FitM is the most that rounding and the fitted waterline leave together, in m: the
// level of the river is known to some tenths of a millimetre.
const FitM = 0.002

// Comparison is a corrected survey held against the truth.
type Comparison struct {
	Points     int64
	Outcomes   map[string]int64
	Unexpected int64  // points with another outcome than the simulation gives them
	Bands      []Band // of the corrected points, by depth from 0 down
	All        Band   // all corrected points
	limitM     float64
}

// Compare reads the outputs and the truth of a survey. It is an error where a
// file cannot be read, or has not a row for each row of the truth.
func Compare(s *Survey) (*Comparison, error) {
	c := &Comparison{Outcomes: map[string]int64{}, limitM: s.LimitM}
	b := bands{step: s.bandM}
	for _, name := range s.Tiles {
		if err := c.compareTile(&b, below(s.Corrected, name), below(s.Truth, truthName(name))); err != nil {
			return nil, err
		}
	}
	c.Bands, c.All = b.report()
	return c, nil
}

// Verify returns an error where the correction does not meet the truth: another
// outcome than the simulation's, or an error above the survey's LimitM.
func (c *Comparison) Verify() error {
	if c.Unexpected > 0 {
		return fmt.Errorf("%d of %d points have another outcome than the simulation gives them", c.Unexpected, c.Points)
	}
	if most := max(c.All.Corrected.ZMax, c.All.Corrected.PlanMax); !(most <= c.limitM) {
		return fmt.Errorf("a corrected point lies %.4f m from the truth, want %g m at most", most, c.limitM)
	}
	return nil
}

// points reads an output row by row: the corrected point, the raw one, and the
// outcome, in this order of columns.
type points interface {
	next() error                 // io.EOF after the last row
	vec(column int) (vec, error) // three numbers from that column on
	text() string                // the last column
	close() error
}

// openPoints opens an output in the format of its name.
func openPoints(path string) (points, error) {
	names := []string{"x", "y", "z", "x_raw", "y_raw", "z_raw", "outcome"}
	if parquetfile.IsName(path) {
		return openChunks(path, names...)
	}
	return openTable(path, names...)
}

// compareTile compares one output with its truth, row by row.
func (c *Comparison) compareTile(b *bands, output, truth string) error {
	found, err := openPoints(output)
	if err != nil {
		return err
	}
	defer found.close()
	known, err := openTable(truth, "x", "y", "z", "depth", "outcome")
	if err != nil {
		return err
	}
	defer known.close()
	for {
		foundErr, knownErr := found.next(), known.next()
		if foundErr == io.EOF && knownErr == io.EOF {
			return nil
		}
		if foundErr == io.EOF || knownErr == io.EOF {
			return fmt.Errorf("%s: only one of it and %s has a row %d, want row for row", output, truth, known.row)
		}
		if err := errors.Join(foundErr, knownErr); err != nil {
			return err
		}
		if err := c.add(b, found, known); err != nil {
			return err
		}
	}
}

// add takes the present row of an output and of its truth.
func (c *Comparison) add(b *bands, found points, known *table) error {
	outcome := found.text()
	c.Points++
	c.Outcomes[outcome]++
	if outcome != known.text() {
		c.Unexpected++
	}
	if outcome != "corrected" || known.text() != "corrected" {
		return nil
	}
	corrected, errCorrected := found.vec(0)
	raw, errRaw := found.vec(3)
	truth, errTruth := known.vec(0)
	depth, errDepth := known.number(3)
	b.add(depth, raw, corrected, truth)
	return errors.Join(errCorrected, errRaw, errTruth, errDepth)
}

// table reads chosen columns of a CSV file row by row. It is not the reader of
// the correction, so that it checks the files as well.
type table struct {
	path    string
	file    *os.File
	rows    *csv.Reader
	columns []int
	fields  []string // of the present row, all columns
	row     int64
}

func openTable(path string, names ...string) (*table, error) {
	file, err := os.Open(path)
	if err != nil {
		return nil, err
	}
	t := &table{path: path, file: file, rows: csv.NewReader(file)}
	if err := t.findColumns(names); err != nil {
		return nil, errors.Join(fmt.Errorf("%s: %w", path, err), file.Close())
	}
	t.rows.ReuseRecord = true
	return t, nil
}

func (t *table) findColumns(names []string) error {
	header, err := t.rows.Read()
	if err != nil {
		return err
	}
	for _, name := range names {
		i := slices.Index(header, name)
		if i < 0 {
			return fmt.Errorf("no column %q; the columns are %q", name, header)
		}
		t.columns = append(t.columns, i)
	}
	return nil
}

// next goes to the next row; io.EOF after the last.
func (t *table) next() (err error) {
	t.row++
	if t.fields, err = t.rows.Read(); err != nil && err != io.EOF {
		return fmt.Errorf("%s: %w", t.path, err)
	}
	return err
}

func (t *table) text() string { return t.fields[t.columns[len(t.columns)-1]] }

func (t *table) number(column int) (float64, error) {
	v, err := strconv.ParseFloat(t.fields[t.columns[column]], 64)
	if err != nil {
		return 0, fmt.Errorf("%s: row %d: %w", t.path, t.row, err)
	}
	return v, nil
}

func (t *table) vec(column int) (vec, error) {
	x, errX := t.number(column)
	y, errY := t.number(column + 1)
	z, errZ := t.number(column + 2)
	return vec{x, y, z}, errors.Join(errX, errY, errZ)
}

func (t *table) close() error { return t.file.Close() }
