package parquetfile

import (
	"bytes"
	"math/rand/v2"
	"slices"
	"testing"
)

// TestRuns compares packed numbers with an encoder that goes bit by bit, and
// reads back mixes of runs.
func TestRuns(t *testing.T) {
	const seed = 7
	r := rand.New(rand.NewPCG(seed, 0))
	for _, rows := range []int{0, 1, 2, 3, 4, 5, 6, 7, 8, 9, 31, 32, 33, 1023, 1024, 1025} {
		for width := uint(1); width <= 32; width++ {
			list, wide := make([]uint32, rows), make([]uint64, rows)
			for i := range list {
				list[i] = uint32(r.Uint64() >> (64 - width))
				if i > 0 && i/40%2 == 1 && r.IntN(9) > 0 {
					list[i] = list[i-1]
				}
				wide[i] = uint64(list[i])
			}
			checkRuns(t, list, wide, width, seed)
			if width <= 8 {
				narrow := make([]uint8, rows)
				for i, v := range list {
					narrow[i] = uint8(v)
				}
				checkRuns(t, narrow, wide, width, seed)
			}
		}
	}
}

func checkRuns[T code](t *testing.T, list []T, want []uint64, width uint, seed int) {
	t.Helper()
	whole := len(list) / 8 * 8
	if got, want := appendPacked(nil, list[:whole], width), hybridBytes(want[:whole], int(width), packedOnly); whole > 0 && !bytes.Equal(got, want) {
		t.Fatalf("%d numbers of %d bits, seed %d: packed as %x, want %x", whole, width, seed, got, want)
	}
	var h hybrid
	h.reset(appendRuns(nil, list, width), width)
	got := make([]uint64, len(want))
	if err := h.next(got); err != nil || !slices.Equal(got, want) {
		t.Fatalf("%d numbers of %d bits, seed %d: read back as %v (%v), want %v", len(want), width, seed, got, err, want)
	}
	if len(h.data) > h.end {
		t.Fatalf("%d numbers of %d bits, seed %d: bytes are left behind the last", len(want), width, seed)
	}
}
