package quality

import (
	"errors"
	"fmt"

	"bentray/io/cloud"
	"bentray/io/csvfile"
	"bentray/io/parquetfile"
	"bentray/pipeline"
)

// open opens both files, and tells what they are.
func (d *fileDiff) open() (err error) {
	if d.made, err = readProvenance(d.pair.corrected); err != nil {
		return err
	}
	if d.rejects, err = readRejects(d.pair.corrected); err != nil {
		return err
	}
	if d.b, err = openTable(d.pair.corrected, textOptions{}); err != nil {
		return err
	}
	if err := d.openFirst(); err != nil {
		d.b.Close()
		return err
	}
	return nil
}

func (d *fileDiff) openFirst() (err error) {
	isOutput := false
	if d.to, isOutput = findOutput(d.b.Columns()); !isOutput {
		return d.noOutput()
	}
	o := textOptions{divert: true}
	for _, c := range d.b.Columns()[:d.to.raw] {
		o.names = append(o.names, c.Name)
	}
	if d.a, err = openTable(d.pair.raw, o); err != nil {
		return err
	}
	if d.from, isOutput = findOutput(d.a.Columns()); isOutput {
		d.report.RowsDiverted = int64(len(d.rejects.lines)) // the first cloud does not have them either
		d.rejects = &rejects{}
	}
	o.passed = d.rejects.lines
	o.headless = !isOutput && d.made != nil && len(d.made.job.Input.CSV.Names) > 0
	if len(o.passed) > 0 || o.headless {
		d.a.Close()
		if d.a, err = openTable(d.pair.raw, o); err != nil {
			return err
		}
	}
	if parquetfile.IsName(d.pair.raw) != parquetfile.IsName(d.pair.corrected) {
		err = callErrorf("%s and %s are of two formats, want one: an output has the format of its input", d.pair.raw, d.pair.corrected)
		return errors.Join(err, d.a.Close())
	}
	if raw, isText := d.a.(*csvfile.File); isText {
		d.rejects.prove(raw, d.made, d.findings)
	}
	return nil
}

// noOutput explains why the second file is none of bentray's.
func (d *fileDiff) noOutput() error {
	if t, err := openTable(d.pair.raw, textOptions{}); err == nil {
		defer t.Close()
		if _, is := findOutput(t.Columns()); is {
			return callErrorf("%s is the raw cloud and %s the corrected one: exchange them", d.pair.corrected, d.pair.raw)
		}
	}
	return callErrorf("%s: has no raw coordinates (such as x_raw, y_raw, z_raw) with depth and outcome behind its own columns, want an output of bentray; the columns are %s", d.pair.corrected, cloud.Names(d.b.Columns()))
}

// inFile puts a file's name before an error, which stays of its kind.
func inFile(path string, err error) error {
	var call *pipeline.CallError
	if errors.As(err, &call) {
		return callErrorf("%s: %w", path, call.Err)
	}
	return fmt.Errorf("%s: %w", path, err)
}
