package demo

import (
	"bytes"
	"fmt"
	"io"
	"math"

	"bentray/io/atomicfile"
	"bentray/io/cloud"
	"bentray/io/parquetfile"
)

// groupRows is how many rows a row group of a Parquet tile has, so that a tile
// has several.
const groupRows = 1 << 14

// columns are those of a Parquet tile.
type columns struct {
	x, y, z, gpsTime                                       []float64
	intensity, returnNumber, classification, pointSourceID []int32
	remark                                                 []string
}

// add appends a shot. A lost one has no coordinates, which NaN stands for.
func (c *columns) add(s *shot) {
	p := s.apparent
	if s.lost {
		p = vec{math.NaN(), math.NaN(), math.NaN()}
	}
	c.x, c.y, c.z = append(c.x, p.x), append(c.y, p.y), append(c.z, p.z)
	c.gpsTime = append(c.gpsTime, float64(takeOffS*1e6+s.timeUS)/1e6)
	n := s.numbers()
	c.intensity, c.returnNumber = append(c.intensity, n[0]), append(c.returnNumber, n[1])
	c.classification, c.pointSourceID = append(c.classification, n[2]), append(c.pointSourceID, n[3])
	c.remark = append(c.remark, s.remark)
}

// bytes is the Parquet file, with the columns in the order of a CSV tile.
func (c *columns) bytes() ([]byte, error) {
	var file bytes.Buffer
	err := parquetfile.WriteTable(&file, []parquetfile.Column{
		{Name: "x", Values: c.x},
		{Name: "y", Values: c.y},
		{Name: "z", Values: c.z},
		{Name: "gps_time", Values: c.gpsTime},
		{Name: "intensity", Values: c.intensity},
		{Name: "return_number", Values: c.returnNumber},
		{Name: "classification", Values: c.classification},
		{Name: "point_source_id", Values: c.pointSourceID},
		{Name: "remark", Values: c.remark},
	}, groupRows)
	return file.Bytes(), err
}

func (t *tile) isParquet() bool { return parquetfile.IsName(t.name) }

// write writes the cloud.
func (t *tile) write(path string) error {
	if !t.isParquet() {
		return atomicfile.Write(path, append([]byte(t.header), t.cloud...))
	}
	data, err := t.table.bytes()
	if err != nil {
		return err
	}
	return atomicfile.Write(path, data)
}

// chunks reads chosen columns of a Parquet file row by row: numbers, and behind
// them one text. It is a table of outputs; that they are what other programs
// read is for other tests.
type chunks struct {
	path  string
	file  *parquetfile.File
	chunk cloud.Chunk
	row   int // in the chunk
}

// openChunks opens a file; the last name is that of the text.
func openChunks(path string, names ...string) (*chunks, error) {
	file, err := parquetfile.Open(path, parquetfile.Options{})
	if err != nil {
		return nil, err
	}
	c := &chunks{path: path, file: file}
	if err := c.begin(names); err != nil {
		file.Close()
		return nil, err
	}
	return c, nil
}

func (c *chunks) begin(names []string) error {
	var read cloud.Request
	for i, name := range names {
		at, err := cloud.Find(c.file.Columns(), name)
		switch {
		case err != nil:
			return fmt.Errorf("%s: %w", c.path, err)
		case at < 0:
			return fmt.Errorf("%s: no column %q; the columns are %s", c.path, name, cloud.Names(c.file.Columns()))
		case i < len(names)-1:
			read.Numbers = append(read.Numbers, at)
		default:
			read.Texts = append(read.Texts, at)
		}
	}
	return c.file.Begin(read, cloud.Layout{}, nil)
}

// next goes to the next row; io.EOF after the last.
func (c *chunks) next() error {
	if c.row++; c.row < c.chunk.Rows {
		return nil
	}
	c.row = 0
	err := c.file.Next(&c.chunk)
	if err == nil || err == io.EOF {
		return err
	}
	return fmt.Errorf("%s: %w", c.path, err)
}

func (c *chunks) text() string { return string(c.chunk.Texts[0].At(c.row)) }

func (c *chunks) vec(column int) (vec, error) {
	n := c.chunk.Numbers
	return vec{n[column][c.row], n[column+1][c.row], n[column+2][c.row]}, nil
}

func (c *chunks) close() error { return c.file.Close() }
