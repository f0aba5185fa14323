package csvfile_test

import (
	"fmt"
	"os"
	"path/filepath"

	"bentray/io/cloud"
	"bentray/io/csvfile"
)

func ExampleOpen() {
	folder, err := os.MkdirTemp("", "")
	if err != nil {
		fmt.Println(err)
		return
	}
	defer os.RemoveAll(folder)
	path := filepath.Join(folder, "lantern_cove.csv")
	text := "# green laser, strip 4\nx;y;z;note\n100.5;200.25;-3.75;rock\n101.0;200.50;;\n"
	if err := os.WriteFile(path, []byte(text), 0o666); err != nil {
		fmt.Println(err)
		return
	}

	f, err := csvfile.Open(path, csvfile.Options{})
	if err != nil {
		fmt.Println(err)
		return
	}
	defer f.Close()
	table, err := cloud.ReadNumbers(f, "x", "z")
	fmt.Println(cloud.Names(f.Columns()), table, err)
	// Output: x, y, z, note [[100.5 101] [-3.75 NaN]] <nil>
}

func ExampleIsName() {
	fmt.Println(csvfile.IsName("raw/strip4.csv"), csvfile.IsName("raw/strip4.xyz.gz"), csvfile.IsName("raw/strip4.pdf"))
	// Output: true true false
}
