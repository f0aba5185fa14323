package csvfile

import (
	"strings"
	"testing"
)

func TestDetect(t *testing.T) {
	tests := []struct {
		name  string
		rows  string
		names int
		want  separator
	}{
		{"comma", "x,y,z|1,2,3", 0, ','},
		{"semicolon", "x;y;z|1;2;3", 0, ';'},
		{"tab", "x\ty\tz|1\t2\t3", 0, '\t'},
		{"spaces", "x y z|1  2 3|4\t5 6", 0, blanks},
		{"header by spaces, rows by tabs", "x y z|1\t2\t3|1\t2\t3", 0, blanks},
		{"decimal commas", "x;y;z|1,5;2,5;3,5|1,5;2,5;3,5", 0, ';'},
		{"decimal commas, named", "1,5;2,5;3,5|1,5;2,5;3,5", 3, ';'},
		{"decimal commas and blanks, named", "1,5 2,5 3,5|1,5 2,5 3,5", 3, blanks},
		{"comma and blanks", "x, y, z|1, 2, 3", 0, ','},
		{"texts with blanks", "place name\tx\ty|Lantern Cove\t1\t2|Heron Bank\t3\t4", 0, '\t'},
		{"a time with a blank, one ragged row", "date time,x,y,z|a b,1,2,3|a b,1,2|a b,1,2,3|a b,1,2,3", 0, ','},
		{"first data row ragged", "x;y;z|1;2|1;2;3|1;2;3", 0, ';'},
		{"stray commas", "x;y;z;note, if any|1;2;3;a|1;2;3;b, c", 0, ';'},
		{"separators in quotes", "\"a;b;c;d\",x,y|\"1;2;3;4\",5,6", 0, ','},
		{"other separators in quotes", "x;y;\"a,b,c\"|1;2;\"d,e,f\"", 0, ';'},
		{"quotes within fields", "x,y,z,note|1,2,3,5\" pipe|4,5,6,7\" pipe", 0, ','},
		{"quotes within fields of the header", "x,y,5\" pipe|1,2,3|4,5,6", 0, ','},
		{"line breaks in quotes", "x,y,\"a|b c|d e|f g\"|1,2,\"a|b c\"", 0, ','},
		{"quotes behind blanks open nothing between commas", "x,y,n|1,2,old \"pipe|3,4,a|5,6,b\"", 0, ','},
		{"header alone", "x,y,z", 0, ','},
		{"two rows that differ", "x,y,z|1,2", 0, ','},
		{"names of no fit", "1,2,3|4,5,6", 5, ','},
		{"pipes", "x|1", 0, 0},
	}
	for _, test := range tests {
		s := takeSample([]byte(strings.ReplaceAll(test.rows, "|", "\n")), true)
		got := separator(0)
		if k := detect(&s.rows, test.names); k >= 0 {
			got = candidates[k]
		}
		if got != test.want {
			t.Errorf("%s: got %q, want %q", test.name, rune(got), rune(test.want))
		}
	}
}

func TestIsName(t *testing.T) {
	for path, want := range map[string]bool{
		"a.csv": true, "b/A.CSV": true, "a.tsv": true, "a.txt": true, "a.xyz": true, "a.asc": true, "a.csv.gz": true, "a.xyz.zst": true, "a.XYZ.GZ": true,
		"a.parquet": false, "a.gz": false, "csv": false, "a.csv.bz2": false, "a.csv/b": false, "a.las.gz": false, "a.csv.gz.gz": false, "": false,
	} {
		if got := IsName(path); got != want {
			t.Errorf("%q: got %v, want %v", path, got, want)
		}
	}
}
