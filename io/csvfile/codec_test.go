package csvfile

import (
	"bytes"
	"io"
	"strings"
	"testing"

	stdgzip "compress/gzip"

	"bentray/io/cloud"

	"github.com/klauspost/compress/zstd"
)

// pack compresses texts, one member or frame each. Gzip is the standard
// library's.
func pack(t *testing.T, name string, texts ...string) string {
	t.Helper()
	var b bytes.Buffer
	for _, text := range texts {
		var w io.WriteCloser = stdgzip.NewWriter(&b)
		if strings.HasSuffix(name, ".zst") {
			var err error
			if w, err = zstd.NewWriter(&b, zstd.WithWindowSize(zstd.MinWindowSize)); err != nil {
				t.Fatal(err)
			}
		}
		io.WriteString(w, text)
		if err := w.Close(); err != nil {
			t.Fatal(err)
		}
	}
	return b.String()
}

func unpack(t *testing.T, name string, packed []byte) string {
	t.Helper()
	var r io.Reader
	if strings.HasSuffix(name, ".zst") {
		z, err := zstd.NewReader(bytes.NewReader(packed))
		if err != nil {
			t.Fatal(err)
		}
		defer z.Close()
		r = z
	} else {
		z, err := stdgzip.NewReader(bytes.NewReader(packed))
		if err != nil {
			t.Fatal(err)
		}
		z.Multistream(false) // one member holds it all
		r = z
	}
	text, err := io.ReadAll(r)
	if err != nil {
		t.Fatal(err)
	}
	return string(text)
}

func TestCompressed(t *testing.T) {
	for _, name := range []string{"a.csv.gz", "a.csv.zst"} {
		m := makeFile(",", "\n", true, true, 1025, 9)
		in := m.in.String()
		packed := pack(t, name, in[:1000], in[1000:1003], "", in[1003:])
		var before []byte
		for range 2 {
			f, err := openText(name, packed, Options{}, 4096)
			if err != nil {
				t.Fatal(err)
			}
			r, err := rewrite(f, cloud.Request{}, madeXYZ)
			if err != nil {
				t.Fatal(err)
			}
			if got := unpack(t, name, r.out); got != m.out.String() {
				t.Errorf("%s: got\n%s\nwant\n%s", name, got, m.out.String())
			}
			if before != nil && !bytes.Equal(before, r.out) {
				t.Errorf("%s: two runs differ", name)
			}
			before = r.out
		}
	}
}

// A gzip header without time and name: RFC 1952 (Deutsch 1996), bytes 4 to 8.
func TestGzipHasNoTime(t *testing.T) {
	f, err := openText("a.csv.gz", pack(t, "a.csv.gz", "x,y,z\n1,2,3\n"), Options{}, 0)
	if err != nil {
		t.Fatal(err)
	}
	r, err := rewrite(f, cloud.Request{}, [3]int{0, 1, 2})
	if err != nil || r.out[3] != 0 || !bytes.Equal(r.out[4:8], make([]byte, 4)) {
		t.Errorf("got header % x, %v", r.out[:min(10, len(r.out))], err)
	}
}

func TestDamagedCompression(t *testing.T) {
	text := "x,y,z\n" + filler[:6<<14]
	for _, name := range []string{"a.csv.gz", "a.csv.zst"} {
		whole := pack(t, name, text)
		flipped := []byte(whole)
		flipped[len(flipped)-3] ^= 0x55 // in the check sum, or the length
		for what, packed := range map[string]string{
			"cut by one byte": whole[:len(whole)-1], "cut in half": whole[:len(whole)/2], "cut in its header": whole[:3],
			"changed": string(flipped), "garbage behind": whole + "garbage", "not compressed": text,
		} {
			got := errorOf(name, packed, Options{}, 0)
			if !strings.HasPrefix(got, name+": ") || !strings.Contains(got, " data are damaged or cut short (") || !strings.HasSuffix(got, "); fetch the file again") {
				t.Errorf("%s %s: got %s", name, what, got)
			}
		}
		if got, want := errorOf(name, "", Options{}, 0), name+" is empty, want a header line"; got != want {
			t.Errorf("got %s, want %s", got, want)
		}
	}
}

// A frame may ask for a window of 256 MiB: RFC 8878 (Collet, Kucherawy 2021),
// 3.1.1.1.2, exponent 18 over 2^10.
func TestZstdWindowBound(t *testing.T) {
	frame := "\x28\xb5\x2f\xfd\x00" + string([]byte{18 << 3}) + "\x01\x00\x00"
	if got, want := errorOf("a.csv.zst", frame, Options{}, 0), "a.csv.zst needs a zstd window above 64 MiB; compress it again with a smaller one"; got != want {
		t.Errorf("got %s, want %s", got, want)
	}
}
