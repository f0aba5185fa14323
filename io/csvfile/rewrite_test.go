package csvfile

import (
	"encoding/csv"
	"fmt"
	"slices"
	"strconv"
	"strings"
	"testing"

	"bentray/io/cloud"
)

// madeXYZ are the positions of x, y, z in a made file.
var madeXYZ = [3]int{1, 4, 2}

func TestRewriteMatrix(t *testing.T) {
	for _, sep := range []string{",", ";", "\t", " "} {
		for _, end := range []string{"\n", "\r\n"} {
			for _, quoted := range []bool{false, true} {
				for _, lastEnd := range []bool{false, true} {
					t.Run(fmt.Sprintf("%q %q quoted %v last line end %v", sep, end, quoted, lastEnd), func(t *testing.T) {
						checkMade(t, makeFile(sep, end, quoted, lastEnd, 47, 7), 47, 300)
					})
				}
			}
		}
	}
}

func TestRewriteSizes(t *testing.T) {
	for _, rows := range []int{0, 1, 2, 3, 4, 5, 6, 7, 8, 9, 31, 32, 33, 1023, 1024, 1025} {
		for _, block := range []int{1, 100, 4096, blockSize} {
			checkMade(t, makeFile(",", "\n", rows%2 == 0, rows%3 != 0, rows, uint64(rows)), rows, block)
		}
	}
}

// checkMade compares a rewritten file with what its maker says.
func checkMade(t *testing.T, m *madeFile, rows, block int) {
	t.Helper()
	f, err := openText("made.csv", m.in.String(), Options{}, block)
	if err != nil {
		t.Fatal(err)
	}
	r, err := rewrite(f, cloud.Request{Numbers: []int{2}, Texts: []int{0, 3}}, madeXYZ)
	if err != nil {
		t.Fatal(err)
	}
	if r.rows != rows || string(r.out) != m.out.String() {
		t.Fatalf("%d rows in blocks of %d: got %d rows\n%s\nwant\n%s", rows, block, r.rows, r.out, m.out.String())
	}
	for i := range rows {
		z, _ := strconv.ParseFloat(m.z[i], 64)
		if r.numbers[0][i] != z || r.texts[0][i] != m.notes[i] || r.texts[1][i] != "1" {
			t.Fatalf("row %d: got %v %q %q, want %v %q", i, r.numbers[0][i], r.texts[0][i], r.texts[1][i], z, m.notes[i])
		}
	}
}

// The standard library's reader sees the same fields in input and output.
func TestRewriteAgainstEncodingCSV(t *testing.T) {
	for _, sep := range []string{",", ";", "\t"} {
		m := makeFile(sep, "\n", true, true, 200, 11)
		f, err := openText("made.csv", m.in.String(), Options{}, 500)
		if err != nil {
			t.Fatal(err)
		}
		r, err := rewrite(f, cloud.Request{}, madeXYZ)
		if err != nil {
			t.Fatal(err)
		}
		in, out := readCSV(t, sep, m.in.String()), readCSV(t, sep, string(r.out))
		if len(in) != 201 || len(out) != 201 {
			t.Fatalf("%d and %d lines, want 201", len(in), len(out))
		}
		for i := range in {
			raw := []string{in[i][1], in[i][4], in[i][2]}
			if i == 0 {
				raw = []string{"x_raw", "y_raw", "z_raw"}
			}
			if !slices.Equal(out[i][5:8], raw) {
				t.Errorf("line %d: raw copies %q, want %q", i, out[i][5:8], raw)
			}
			if in[i][0] != out[i][0] || in[i][3] != out[i][3] {
				t.Errorf("line %d: untouched columns %q and %q became %q and %q", i, in[i][0], in[i][3], out[i][0], out[i][3])
			}
		}
	}
}

func readCSV(t *testing.T, sep, text string) [][]string {
	t.Helper()
	r := csv.NewReader(strings.NewReader(text))
	r.Comma = rune(sep[0])
	rows, err := r.ReadAll()
	if err != nil {
		t.Fatal(err)
	}
	return rows
}

func TestRewriteByHand(t *testing.T) {
	const added = "x_raw,y_raw,z_raw,depth,outcome,n water,rays"
	const other = `0.250,"not ""so"", ; this	one",,1`
	tests := []struct{ name, in, want string }{
		{"header only", "x,y,z\n", "x,y,z," + added + "\n"},
		{"header without line end", "x,y,z", "x,y,z," + added},
		{"byte order mark", "\xef\xbb\xbfx,y,z\n1,2,3\n", "\xef\xbb\xbfx,y,z," + added + "\n2.0000,3.0000,4.0000,1,2,3,0.000,corrected,1.34,0\n"},
		{"comments and empty lines ahead", "# a, \"b\n\n//c\r\n \nx,y,z\n1,2,3", "# a, \"b\n\n//c\r\n \nx,y,z," + added + "\n2.0000,3.0000,4.0000,1,2,3,0.000,corrected,1.34,0"},
		{"empty lines between and behind", "x,y,z\n\n1,2,3\r\n\r\n\n4,5,6\n\n", "x,y,z," + added + "\n\n2.0000,3.0000,4.0000,1,2,3,0.000,corrected,1.34,0\r\n\r\n\n4,5,6,4,5,6," + other + "\n\n"},
		{"blanks in fields", "x,y,z\n 1 ,\" 2\",\t3\n", "x,y,z," + added + "\n2.0000,3.0000,4.0000, 1 ,\" 2\",\t3,0.000,corrected,1.34,0\n"},
		{"missing coordinates", "x,y,z\n,\"\",nan\n", "x,y,z," + added + "\n,,,,\"\",nan,0.000,corrected,1.34,0\n"},
		{"infinite coordinate", "x,y,z\n1,-INF,3\n", "x,y,z," + added + "\n2.0000,,4.0000,1,-INF,3,0.000,corrected,1.34,0\n"},
		{"header kept byte for byte", " \"x\", y,\"z\" \n1,2,3\n", " \"x\", y,\"z\" ," + added + "\n2.0000,3.0000,4.0000,1,2,3,0.000,corrected,1.34,0\n"},
		{"same names twice", "x,y,z,a,a\n1,2,3,,\n", "x,y,z,a,a," + added + "\n2.0000,3.0000,4.0000,,,1,2,3,0.000,corrected,1.34,0\n"},
		{
			"runs of blanks", "  x  y z \n \t \n 1   2\t 3 \n4 5 \"\"\n",
			"  x  y z  x_raw y_raw z_raw depth outcome \"n water\" rays\n \t \n 2.0000   3.0000\t 4.0000  1 2 3 0.000 corrected 1.34 0\n" +
				"4 5 \"\" 4 5 \"\" 0.250 \"not \"\"so\"\", ; this	one\" \"\" 1\n",
		},
	}
	for _, test := range tests {
		t.Run(test.name, func(t *testing.T) {
			f, err := openText("a.csv", test.in, Options{}, 0)
			if err != nil {
				t.Fatal(err)
			}
			r, err := rewrite(f, cloud.Request{}, [3]int{0, 1, 2})
			if err != nil || string(r.out) != test.want {
				t.Errorf("got  %q, %v\nwant %q", r.out, err, test.want)
			}
		})
	}
}

func TestRewriteNames(t *testing.T) {
	tests := []struct{ name, in, want string }{
		{"comma", "1,2,3\n", "x,\"y,m\",z,x_raw,y_raw,z_raw,depth,outcome,n water,rays\n2.0000,3.0000,4.0000,1,2,3,0.000,corrected,1.34,0\n"},
		{"line end of the first row", "# c\n1,2,3\r\n", "# c\nx,\"y,m\",z,x_raw,y_raw,z_raw,depth,outcome,n water,rays\r\n2.0000,3.0000,4.0000,1,2,3,0.000,corrected,1.34,0\r\n"},
		{"no line end", "1 2 3", "x y,m z x_raw y_raw z_raw depth outcome \"n water\" rays\n2.0000 3.0000 4.0000 1 2 3 0.000 corrected 1.34 0"},
	}
	for _, test := range tests {
		f, err := openText("a.csv", test.in, Options{Names: []string{"x", "y,m", "z"}}, 0)
		if err != nil {
			t.Fatal(err)
		}
		r, err := rewrite(f, cloud.Request{}, [3]int{0, 1, 2})
		if err != nil || string(r.out) != test.want {
			t.Errorf("%s: got %q, %v\nwant %q", test.name, r.out, err, test.want)
		}
	}
}

func TestTexts(t *testing.T) {
	f, err := openText("a.csv", "x,y,z,views\n1,2,3, c1 c2 \n1,2,3,\"a \"\"b\"\"\"\"\"\n1,2,3,\"\"\n1,2,3, \" c;d\" \n1,2,3,\"5\"\" or 6\"\"\"\n", Options{}, 0)
	if err != nil {
		t.Fatal(err)
	}
	r, err := rewrite(f, cloud.Request{Texts: []int{3}}, [3]int{0, 1, 2})
	want := []string{"c1 c2", `a "b""`, "", "c;d", `5" or 6"`}
	if err != nil || !slices.Equal(r.texts[0], want) {
		t.Errorf("got %q, %v, want %q", r.texts[0], err, want)
	}
}
