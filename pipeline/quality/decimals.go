package quality

import (
	"bytes"
	"io"
	"math"

	"bentray/io/cloud"
	"bentray/io/parquetfile"
)

// tolerance is how far the height of a corrected point may be from level minus depth:
// of CSV, each of the three is rounded.
func (d *fileDiff) tolerance() (float64, error) {
	if parquetfile.IsName(d.pair.corrected) {
		return 1e-6, nil
	}
	decimals, err := decimalsOf(d.pair.corrected, d.to.at("depth"))
	return 1.5*math.Pow10(-decimals) + 1e-9, err
}

// decimalsOf is how many decimals the numbers of a column have, the most in the first
// part of the file where there are any.
func decimalsOf(path string, column int) (decimals int, err error) {
	t, err := openTable(path, textOptions{})
	if err != nil {
		return 0, err
	}
	defer t.Close()
	if err := t.Begin(cloud.Request{Stored: []int{column}}, cloud.Layout{}, nil); err != nil {
		return 0, err
	}
	var c cloud.Chunk
	for decimals == 0 {
		if err := t.Next(&c); err == io.EOF {
			return 0, nil
		} else if err != nil {
			return 0, err
		}
		if err := t.Decode(&c); err != nil {
			return 0, err
		}
		decimals = mostDecimals(&c.Stored[0])
	}
	return decimals, nil
}

func mostDecimals(numbers *cloud.Texts) (most int) {
	for i := range numbers.Ends {
		_, behind, _ := bytes.Cut(numbers.At(i), []byte("."))
		most = max(most, len(behind))
	}
	return most
}
