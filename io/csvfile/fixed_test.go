package csvfile

import (
	"math"
	"math/big"
	"math/rand/v2"
	"strconv"
	"testing"
)

func TestAppendFixed(t *testing.T) {
	tests := []struct {
		v        float64
		decimals int
		want     string
	}{
		{0, 4, "0.0000"},
		{math.Copysign(0, -1), 4, "0.0000"},
		{-0.00004, 4, "0.0000"},
		{-0.00005, 4, "-0.0001"},
		{0.5, 0, "1"}, // halves go away from zero
		{1.5, 0, "2"},
		{2.5, 0, "3"},
		{-2.5, 0, "-3"},
		{0.49999999999999994, 0, "0"}, // the double below one half: adding one half would give 1
		{0.125, 2, "0.13"},
		{-0.375, 2, "-0.38"},
		{9.9999, 3, "10.000"},
		{99.95, 1, "100.0"}, // 99.95*10 is 999.5 as a double
		{1, 15, "1.000000000000000"},
		{4503599627370497.5, 0, "4503599627370498"},
		{9007199254740991, 0, "9007199254740991"},
		{9007199254740992, 0, "9007199254740992"}, // 2^53 and beyond: exact
		{900719925474.0993, 4, "900719925474.0992"},
		{1e22, 2, "10000000000000000000000.00"},
		{-math.MaxFloat64, 0, "-" + strconv.FormatFloat(math.MaxFloat64, 'f', 0, 64)},
		{5e-324, 15, "0.000000000000000"},
	}
	for _, test := range tests {
		if got := string(appendFixed(nil, test.v, test.decimals)); got != test.want {
			t.Errorf("%v with %d decimals: got %s, want %s", test.v, test.decimals, got, test.want)
		}
	}
}

// What is written is the whole number next to v*10^d: within one half of it and
// the rounding of that product, by exact arithmetic; and it has the form that
// the standard library writes.
func TestAppendFixedAgainstRationals(t *testing.T) {
	const seed = 5
	r := rand.New(rand.NewPCG(seed, 0))
	for range 100000 {
		decimals := r.IntN(maxDecimals + 1)
		v := r.NormFloat64() * math.Pow10(r.IntN(14)-4)
		if r.IntN(4) == 0 {
			v = math.Round(v*8) / 8 // many halves
		}
		got := string(appendFixed(nil, v, decimals))
		written, ok := new(big.Rat).SetString(got)
		if !ok {
			t.Fatalf("%v with %d decimals: got %q, want a number (seed %d)", v, decimals, got, seed)
		}
		scale := new(big.Rat).SetInt(new(big.Int).Exp(big.NewInt(10), big.NewInt(int64(decimals)), nil))
		off := new(big.Rat).Sub(written, new(big.Rat).SetFloat64(v))
		off.Mul(off.Abs(off), scale)
		scaled := math.Abs(v) * math.Pow10(decimals)
		ulp := math.Nextafter(scaled, math.Inf(1)) - scaled
		if most := new(big.Rat).SetFloat64(0.5 + ulp); off.Cmp(most) > 0 {
			t.Errorf("%v with %d decimals: got %s, off by %s (seed %d)", v, decimals, got, off.FloatString(3), seed)
		}
		if want := strconv.FormatFloat(v, 'f', decimals, 64); len(got) != len(want) && written.Sign() != 0 {
			if parsed, _ := new(big.Rat).SetString(want); parsed.Cmp(written) == 0 {
				t.Errorf("%v with %d decimals: got %s, want the form of %s (seed %d)", v, decimals, got, want, seed)
			}
		}
	}
}
