package geo

import (
	"slices"
	"strconv"
	"strings"
	"testing"
)

// namedCameras returns cameras with ids.
func namedCameras(t testing.TB, ids ...string) *Cameras {
	return mustCameras(t, CameraRecords{ID: ids, X: equal(len(ids), 0), Y: equal(len(ids), 0), Z: equal(len(ids), 9)})
}

func TestAppendViews(t *testing.T) {
	c := namedCameras(t, "B1", "A7", "IMG_0012.JPG", "b1", "Straße,3", "7")
	for _, tc := range []struct {
		cell string
		want []int32
	}{
		{"", nil},
		{"  ; ;", nil},
		{"A7", []int32{1}},
		{"A7 B1", []int32{0, 1}},
		{"7;b1;A7;B1", []int32{0, 1, 3, 5}},
		{" A7;  IMG_0012.JPG ; ;B1 ", []int32{0, 1, 2}},
		{"A7 B1 A7;A7", []int32{0, 1}},
		{"Straße,3\tA7\r\nB1", []int32{0, 1, 4}},
	} {
		got, err := c.AppendViews([]int32{9, 9, 3}, []byte(tc.cell))
		if err != nil || !slices.Equal(got, append([]int32{9, 9, 3}, tc.want...)) {
			t.Errorf("%q: %v, %v, want 9, 9, 3 and %v", tc.cell, got, err, tc.want)
		}
		if err := c.CheckViews([]byte(tc.cell)); err != nil {
			t.Errorf("%q: %v", tc.cell, err)
		}
	}
}

// TestAppendViewsUnknown wants an error that names the id and, where an id differs in
// no more than the manner of writing, that one.
func TestAppendViewsUnknown(t *testing.T) {
	c := namedCameras(t, "IMG_0012.JPG", "IMG_0013.JPG", "east/7.tif", "p.1", "p-1", "00", "Cam007", "strip2.1042", "q8811")
	const end = `, want their ids, with blanks or ";" between`
	for _, tc := range []struct{ cell, want string }{
		{"IMG_0013.JPG IMG_0012", `camera "IMG_0012" is none of the 9 known; did you mean "IMG_0012.JPG"?`},
		{"img_12.jpg;IMG_0013.JPG", `camera "img_12.jpg" is none of the 9 known; did you mean "IMG_0012.JPG"?`},
		{`D:\flight\IMG-0013.tiff`, `camera "D:\\flight\\IMG-0013.tiff" is none of the 9 known; did you mean "IMG_0013.JPG"?`},
		{"IMG_0014.JPG", `camera "IMG_0014.JPG" is none of the 9 known` + end},
		{"7", `camera "7" is none of the 9 known; did you mean "east/7.tif"?`},
		{"cam7", `camera "cam7" is none of the 9 known; did you mean "Cam007"?`},
		{"p1", `camera "p1" is none of the 9 known` + end}, // two are like it
		{"p.1,p-1", `camera "p.1,p-1" is none of the 9 known; commas do not separate ids, want blanks or ";" between`},
		{"0", `camera "0" is none of the 9 known` + end},
		{"strip2.1043", `camera "strip2.1043" is none of the 9 known` + end},
		{"q", `camera "q" is none of the 9 known` + end},
		{strings.Repeat("n", 500), `camera "` + strings.Repeat("n", 60) + `" is none`},
	} {
		got, err := c.AppendViews([]int32{5}, []byte(tc.cell))
		wantError(t, err, tc.want)
		wantError(t, c.CheckViews([]byte(tc.cell)), tc.want)
		if !slices.Equal(got, []int32{5}) {
			t.Errorf("%q: appended %v", tc.cell, got)
		}
	}
}

// TestAppendViewsRandomly writes random sets of cameras as cells, of many ids too.
func TestAppendViewsRandomly(t *testing.T) {
	rng := newRand(t, 88)
	ids := make([]string, 300)
	for k, i := range rng.Perm(len(ids)) {
		ids[k] = "v" + strconv.Itoa(i)
	}
	c := namedCameras(t, ids...)
	separators := []string{" ", ";", "; ", "  ", ";;"}
	for range 500 {
		in := make([]bool, len(ids))
		var cell strings.Builder
		for range rng.IntN(1 << rng.IntN(10)) {
			k := rng.IntN(len(ids))
			in[k] = true
			cell.WriteString(ids[k] + separators[rng.IntN(len(separators))])
		}
		var want []int32
		for k, is := range in {
			if is {
				want = append(want, int32(k))
			}
		}
		if got, err := c.AppendViews(nil, []byte(cell.String())); err != nil || !slices.Equal(got, want) {
			t.Fatalf("%q: %v, %v, want %v", cell.String(), got, err, want)
		}
	}
}

func TestViewsAllocateNothing(t *testing.T) {
	long := strings.Repeat("longer-than-most", 4)
	c := namedCameras(t, "IMG_0012.JPG", "IMG_0013.JPG", long)
	cell, dst := []byte(long+";IMG_0013.JPG IMG_0012.JPG"), make([]int32, 0, 3)
	if n := testing.AllocsPerRun(100, func() { dst, _ = c.AppendViews(dst[:0], cell) }); n != 0 || len(dst) != 3 {
		t.Errorf("AppendViews: %v allocations a cell, %v", n, dst)
	}
	if n := testing.AllocsPerRun(100, func() { _ = c.CheckViews(cell) }); n != 0 {
		t.Errorf("CheckViews: %v allocations a cell", n)
	}
}
