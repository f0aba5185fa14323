package csvfile

import (
	"math"
	"math/rand/v2"
	"strconv"
	"testing"
)

func TestParseNumberHardTexts(t *testing.T) {
	for _, text := range []string{
		"0", "-0", "+0", "-0.0", "1", "-1.5", "+2.25", ".5", "5.", "-.5", "007.50", "1e5", "1E-5", "-1.25e+10", "1e400", "-1e400", "1e-400",
		"9007199254740991", "9007199254740992", "9007199254740993", "9007199254740992.5", "9999999999999999999", "18446744073709551616", "99999999999999999999",
		"0.1", "0.3", "314523841.79786104", "501352.91131933563", "0.0000000000000000000001", "1.0000000000000000000000", "0000000000000000000000012.5",
		"4.9e-324", "2.4703282292062327e-324", "2.2250738585072012e-308", "2.2250738585072011e-308", "1.7976931348623157e308", "1.7976931348623159e308",
		"1.00000000000000011102230246251565404236316680908203125", // halfway between 1 and the next double
	} {
		checkParse(t, text)
	}
}

func TestParseNumberRandom(t *testing.T) {
	const seed = 3
	r := rand.New(rand.NewPCG(seed, 0))
	for range 200000 {
		digits := make([]byte, 0, 40)
		for range 1 + r.IntN(24) {
			digits = append(digits, byte('0'+r.IntN(10)))
		}
		point := r.IntN(len(digits) + 1)
		checkParse(t, string(digits[:point])+"."+string(digits[point:]))
		checkParse(t, string(digits))
		v := math.Float64frombits(r.Uint64())
		if !math.IsNaN(v) && !math.IsInf(v, 0) {
			checkParse(t, strconv.FormatFloat(v, 'g', -1, 64))
		}
		checkParse(t, strconv.FormatFloat(r.NormFloat64()*1e6, 'f', r.IntN(18), 64))
	}
	if t.Failed() {
		t.Logf("seed %d", seed)
	}
}

// Halfway cases are where a quotient could be rounded the wrong way.
func TestParseNumberHalfway(t *testing.T) {
	const seed = 4
	r := rand.New(rand.NewPCG(seed, 0))
	for range 50000 {
		odd := 1<<53 + 2*r.Uint64N(1<<52) + 1 // 54 bits: between two doubles
		for k := range 4 {
			part := strconv.FormatFloat(float64(odd%(1<<k))/float64(int(1)<<k), 'f', k, 64)
			checkParse(t, strconv.FormatUint(odd>>k, 10)+part[1:]) // odd/2^k, all digits
		}
	}
	if t.Failed() {
		t.Logf("seed %d", seed)
	}
}

// checkParse compares with the standard library, bit by bit.
func checkParse(t *testing.T, text string) {
	t.Helper()
	want, _ := strconv.ParseFloat(text, 64)
	got, ok := parseNumber([]byte(text))
	if !ok || math.Float64bits(got) != math.Float64bits(want) {
		t.Errorf("%q: got %v %v, want %v", text, got, ok, want)
	}
}

func TestParseNumberForms(t *testing.T) {
	nan, inf := math.NaN(), math.Inf(1)
	for text, want := range map[string]float64{
		"": nan, " \t": nan, `""`: nan, `" "`: nan, "NaN": nan, "-nan": nan, " inf ": inf, "+Inf": inf, "-INFINITY": -inf,
		" 12.5": 12.5, "12.5\t": 12.5, `"12.5"`: 12.5, ` " -12.5 " `: -12.5, `"1e3"`: 1000,
	} {
		got, ok := parseNumber([]byte(text))
		if !ok || got != want && !(math.IsNaN(got) && math.IsNaN(want)) {
			t.Errorf("%q: got %v %v, want %v", text, got, ok, want)
		}
	}
}

func TestParseNumberRefuses(t *testing.T) {
	for _, text := range []string{
		"0x1p-2", "0x10", "1_000", "1e", "1e+", "e5", ".", "-", "+", "-.", "--1", "+-1", "- 1", "1.2.3", "1,5", "-9999m", "1 2", "1e5.5", "12e3e4",
		"infi", "nano", "na", "null", "0b1", "0o7", "\u0661", "1\x00", `"1`, `1"`, `"`, `"1""2"`, `""1""`,
	} {
		if v, ok := parseNumber([]byte(text)); ok {
			t.Errorf("%q: got %v, want it refused", text, v)
		}
	}
}
