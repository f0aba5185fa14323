package parquetfile

import (
	"errors"
	"io"
	"strconv"
	"testing"

	"github.com/xitongsys/parquet-go/parquet"

	"bentray/io/cloud"
)

// TestCheckNamesItsRow has a text that is refused in the third of four row groups.
func TestCheckNamesItsRow(t *testing.T) {
	text := built{name: "views", typ: parquet.Type_BYTE_ARRAY, required: true}
	for i := range 40 {
		text.values = append(text.values, "c"+strconv.Itoa(i))
	}
	path := buildFile(t, []built{text}, []int{10, 10, 10, 10}, nil)
	f, err := Open(path, Options{})
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	refuse := func(text []byte) error {
		if string(text) == "c24" {
			return errors.New("names no camera")
		}
		return nil
	}
	if err := f.Begin(cloud.Request{Texts: []int{0}, Checks: []func([]byte) error{refuse}}, cloud.Layout{}, nil); err != nil {
		t.Fatal(err)
	}
	var c cloud.Chunk
	for err = nil; err == nil; {
		if err = f.Next(&c); err == nil {
			err = f.Decode(&c)
		}
	}
	if want := path + ": row 25: views names no camera"; err == io.EOF || err.Error() != want {
		t.Errorf("got %v, want %s", err, want)
	}
}
