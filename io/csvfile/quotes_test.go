package csvfile

import (
	"encoding/csv"
	"fmt"
	"io"
	"math/rand/v2"
	"slices"
	"strings"
	"testing"

	"bentray/io/cloud"
)

// inches is a cloud of 20000 rows whose rows 6 and 19991 have inch marks in
// their notes: were the marks quotes, they would enclose all rows between.
func inches(sep string) (text string, bad [2]string) {
	var b strings.Builder
	b.WriteString(strings.Join([]string{"x", "y", "z", "note"}, sep) + "\n")
	for i := 1; i <= 20000; i++ {
		row := strings.Join([]string{fmt.Sprint(i), "2.5", "-3.25", "sand"}, sep)
		if i == 6 || i == 19991 {
			row = strings.Replace(row, "sand", `5"pipe`, 1)
			bad[i/19991] = row
		}
		b.WriteString(row + "\n")
	}
	return b.String(), bad
}

const straySays = "has a quote within a field, want quotes around the whole field"

func TestInchMarksSwallowNothing(t *testing.T) {
	for _, sep := range []string{",", ";", "\t", " "} {
		text, bad := inches(sep)
		for _, block := range []int{1000, blockSize} {
			if got, want := errorOf("a.csv", text, Options{}, block), "a.csv: line 7: note "+straySays; got != want {
				t.Errorf("%q, blocks of %d: got %s, want %s", sep, block, got, want)
			}
			f, err := openText("a.csv", text, Options{Divert: true}, block)
			if err != nil {
				t.Fatal(err)
			}
			r, err := rewrite(f, cloud.Request{Numbers: []int{0}}, [3]int{0, 1, 2})
			if err != nil || r.rows != 19998 || len(r.rejects) != 2 || r.numbers[0][5] != 7 || r.numbers[0][19997] != 20000 {
				t.Fatalf("%q, blocks of %d: got %d rows, %d rejects, %v", sep, block, r.rows, len(r.rejects), err)
			}
			for k, line := range []int64{7, 19992} {
				got := r.rejects[k]
				if got.Line != line || got.Reason != "note "+straySays || string(got.Text) != bad[k] {
					t.Errorf("%q, blocks of %d: got %d %s %q", sep, block, got.Line, got.Reason, got.Text)
				}
			}
		}
	}
}

// A quote that opens a field and is not closed in its row does swallow rows, up
// to the next quote. All of them are the bad row's text.
func TestOpenQuoteIsDivertedWhole(t *testing.T) {
	const rows = 5000
	swallowed := `6,2.5,-3.25,"pipe` + "\n" + strings.Repeat("1,2.5,-3.25,sand\n", rows) + `7,2.5,-3.25,"pipe`
	text := "x,y,z,note\n1,2,3,a\n" + swallowed + "\n4,5,6,b\n"
	says := "has a quote within a field on line 5004, want quotes around the whole field"
	for _, block := range []int{1, 1000, blockSize} {
		if got, want := errorOf("a.csv", text, Options{}, block), "a.csv: line 3: note "+says; got != want {
			t.Errorf("blocks of %d: got %s, want %s", block, got, want)
		}
		f, err := openText("a.csv", text, Options{Divert: true}, block)
		if err != nil {
			t.Fatal(err)
		}
		r, err := rewrite(f, cloud.Request{Numbers: []int{0}}, [3]int{0, 1, 2})
		if err != nil || !slices.Equal(r.numbers[0], []float64{1, 4}) || len(r.rejects) != 1 {
			t.Fatalf("blocks of %d: got %v, %d rejects, %v", block, r.numbers, len(r.rejects), err)
		}
		if got := r.rejects[0]; got.Line != 3 || got.Reason != "note "+says || string(got.Text) != swallowed {
			t.Errorf("blocks of %d: got %d %s, %d bytes, want 3, %s, %d bytes", block, got.Line, got.Reason, len(got.Text), says, len(swallowed))
		}
	}
}

// The first row of a file without a header may be a bad one like any other.
func TestStrayQuoteInFirstRowOfNamed(t *testing.T) {
	f, err := openText("a.csv", "1,2,5\"\n4,5,6\n", Options{Names: []string{"x", "y", "z"}, Divert: true}, 0)
	if err != nil {
		t.Fatal(err)
	}
	r, err := rewrite(f, cloud.Request{}, [3]int{0, 1, 2})
	if err != nil || r.rows != 1 || len(r.rejects) != 1 || r.rejects[0].Line != 1 || r.rejects[0].Reason != "z "+straySays {
		t.Errorf("got %d rows, rejects %+v, %v", r.rows, r.rejects, err)
	}
}

// A quote that would open a field only where blanks separate does not make the
// whole file a sample.
func TestSampleIsBounded(t *testing.T) {
	f, err := openText("a.csv", "x,y,z,n\n1,2,3,old \"pipe\n"+strings.Repeat("1,2,3,sand\n", 300000), Options{Divert: true}, 0)
	if err != nil || f.sep != ',' || f.source.done > blockSize {
		t.Fatalf("got separator %q, %d bytes read, %v, want ',', %d at most", rune(f.sep), f.source.done, err, blockSize)
	}
	r, err := rewrite(f, cloud.Request{}, [3]int{0, 1, 2})
	if err != nil || r.rows != 300000 || len(r.rejects) != 1 || r.rejects[0].Line != 2 {
		t.Errorf("got %d rows, %d rejects, %v", r.rows, len(r.rejects), err)
	}
}

// Random texts of quotes, separators and line breaks: what the standard
// library's strict reader refuses is refused, what it accepts reads the same.
func TestMalformedAgainstEncodingCSV(t *testing.T) {
	const seed = 5
	r := rand.New(rand.NewPCG(seed, 0))
	var refused, accepted int
	for range 20000 {
		sep := []string{",", ";", "\t"}[r.IntN(3)]
		text := strings.Repeat("p"+sep+"q\n", sampleRows) // so that the separator is found
		for range 1 + r.IntN(5) {
			text += randomField(r, sep) + sep + randomField(r, sep) + "\n"
		}
		want, wantErr := readStrict(sep, text)
		got, err := readTexts(text, r.IntN(30))
		if (err == nil) != (wantErr == nil) || err == nil && !slices.Equal(got, want) {
			t.Fatalf("seed %d, %q: got %q, %v, want %q, %v", seed, text, got, err, want, wantErr)
		}
		if err == nil {
			accepted++
		} else {
			refused++
		}
	}
	if accepted < 3000 || refused < 3000 {
		t.Errorf("%d accepted, %d refused, want 3000 at least of each", accepted, refused)
	}
}

// randomField is mostly a good field, sometimes any few bytes.
func randomField(r *rand.Rand, sep string) string {
	text := ""
	for range r.IntN(5) {
		text += []string{"a", "1", `"`, "\n", sep}[r.IntN(5)]
	}
	if r.IntN(6) == 0 {
		return text
	}
	return `"` + strings.ReplaceAll(text, `"`, `""`) + `"`
}

// readStrict reads the rows behind the header with the standard library.
func readStrict(sep, text string) (fields []string, err error) {
	r := csv.NewReader(strings.NewReader(text))
	r.Comma = rune(sep[0])
	rows, err := r.ReadAll()
	if err != nil {
		return nil, err
	}
	fields = slices.Concat(rows[1:]...)
	for i := range fields {
		fields[i] = strings.Trim(fields[i], " \t") // as Chunk.Texts are
	}
	return fields, nil
}

// readTexts reads the two columns of a text as texts.
func readTexts(text string, block int) (fields []string, err error) {
	f, err := openText("a.csv", text, Options{}, block)
	if err != nil {
		return nil, err
	}
	if err := f.Begin(cloud.Request{Texts: []int{0, 1}}, cloud.Layout{}, nil); err != nil {
		return nil, err
	}
	var c cloud.Chunk
	for {
		if err := f.Next(&c); err == io.EOF {
			return fields, nil
		} else if err != nil {
			return nil, err
		}
		if err := f.Decode(&c); err != nil {
			return nil, err
		}
		for i := range c.Rows {
			fields = append(fields, string(c.Texts[0].At(i)), string(c.Texts[1].At(i)))
		}
	}
}
