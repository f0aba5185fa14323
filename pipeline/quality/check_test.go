package quality

import (
	"encoding/json"
	"fmt"
	"math"
	"math/rand/v2"
	"os"
	"path/filepath"
	"slices"
	"strconv"
	"strings"
	"testing"

	"gonum.org/v1/gonum/stat"

	"bentray/pipeline/receipt"
)

func exact(v float64) string { return strconv.FormatFloat(v, 'f', -1, 64) }

func isNear(got Number, want, tolerance float64) bool {
	return math.Abs(float64(got)-want) <= tolerance
}

// bed is a plane, so that a plane fitted to its points gives it back.
func bed(x, y float64) float64 { return sceneLevel - (1.5 + 0.05*(x-500_000) + 0.02*(y-7_000_000)) }

// checkedCloud is a corrected cloud over the plane, its raw one, and check points on
// which it is wrong by a bias, a slope with depth and noise.
func checkedCloud(points, checks int) (raw, corrected, check sheet) {
	rng := rand.New(rand.NewPCG(300, 44))
	raw = sheet{{"x", "y", "z", "point_source_id"}}
	corrected = sheet{append(slices.Clone(raw[0]), "x_raw", "y_raw", "z_raw", "depth", "water_level", "outcome", "incidence_deg", "run")}
	for i := range points {
		x, y := 500_000+100*rng.Float64(), 7_000_000+100*rng.Float64()
		z, line := bed(x, y), strconv.Itoa(10+i%2)
		own := []string{exact(x + 0.3*rng.Float64()), exact(y - 0.2*rng.Float64()), exact(z - rng.Float64()), line}
		raw = append(raw, own)
		row := append([]string{exact(x), exact(y), exact(z), line}, own[:3]...)
		corrected = append(corrected, append(row, exact(sceneLevel-z), exact(sceneLevel), "corrected", exact(25*rng.Float64()), "a1b2c3"))
	}
	check = sheet{{"x", "y", "z"}}
	for range checks {
		x, y := 500_001+98*rng.Float64(), 7_000_001+98*rng.Float64()
		z := bed(x, y)
		check = append(check, []string{exact(x), exact(y), exact(z - (0.03 + 0.004*(sceneLevel-z) + 0.1*rng.NormFloat64()))})
	}
	return raw, corrected, check
}

// expected residuals and depths, by the plain way: every corrected point is looked at.
func expected(t *testing.T, corrected, check sheet, match string) (residual, depth []float64) {
	t.Helper()
	px, py, pz := corrected.numbers(t, "x"), corrected.numbers(t, "y"), corrected.numbers(t, "z")
	cx, cy, cz := check.numbers(t, "x"), check.numbers(t, "y"), check.numbers(t, "z")
	for i := range cx {
		z, least := bed(cx[i], cy[i]), math.Inf(1)
		for k := range px {
			if d := math.Hypot(px[k]-cx[i], py[k]-cy[i]); match == MatchNearest && d < least {
				z, least = pz[k], d
			}
		}
		residual, depth = append(residual, z-cz[i]), append(depth, sceneLevel-cz[i])
	}
	return residual, depth
}

// TestCheckFigures holds 300 check points to gonum's statistics and plain loops.
func TestCheckFigures(t *testing.T) {
	raw, corrected, check := checkedCloud(20_000, 300)
	path := check.write(t, filepath.Join(t.TempDir(), "check.csv"))
	for _, format := range formats {
		for _, match := range []string{MatchPlane, MatchNearest} {
			r := diffSheets(t, format, raw, corrected, Options{Check: path, Reach: 2, Match: match}).Check
			residual, depth := expected(t, corrected, check, match)
			if r.Count != 300 || r.Unmatched != 0 || r.OnLand != 0 {
				t.Fatalf("%s %s: %d matched, %d not, %d on land", format, match, r.Count, r.Unmatched, r.OnLand)
			}
			checkResiduals(t, format+" "+match, r.Residuals, residual)
			checkSlope(t, r, residual, depth)
			checkByDepth(t, r, residual, depth)
			checkShares(t, r, residual, depth)
			if len(r.Warnings) > 0 {
				t.Errorf("warnings %q", r.Warnings)
			}
		}
	}
}

func checkResiduals(t *testing.T, what string, r Residuals, residual []float64) {
	t.Helper()
	squares, magnitudes := 0.0, make([]float64, len(residual))
	for i, v := range residual {
		squares += v * v
		magnitudes[i] = math.Abs(v)
	}
	slices.Sort(magnitudes)
	at := 0.95 * float64(len(residual)-1)
	low, high := magnitudes[int(math.Floor(at))], magnitudes[int(math.Ceil(at))]
	for name, pair := range map[string][2]float64{
		"bias": {float64(r.Bias), stat.Mean(residual, nil)},
		"rmse": {float64(r.RMSE), math.Sqrt(squares / float64(len(residual)))},
		"std":  {float64(r.Std), stat.StdDev(residual, nil)},
		"p95":  {float64(r.P95), low + (at-math.Floor(at))*(high-low)},
	} {
		if !(math.Abs(pair[0]-pair[1]) <= 1e-9) && len(residual) > 1 {
			t.Errorf("%s: %s is %v, want %v", what, name, pair[0], pair[1])
		}
	}
}

// checkSlope compares with gonum's regression; the standard error follows from the
// correlation r as |slope| sqrt((1/r^2 - 1) / (n - 2)), an identity.
func checkSlope(t *testing.T, r *CheckReport, residual, depth []float64) {
	t.Helper()
	_, slope := stat.LinearRegression(depth, residual, nil, false)
	c := stat.Correlation(depth, residual, nil)
	sigma := math.Abs(slope) * math.Sqrt((1/(c*c)-1)/float64(len(depth)-2))
	if !isNear(r.Slope, slope, 1e-9) || !isNear(r.SlopeSigma, sigma, 1e-9) {
		t.Errorf("slope %v ± %v, want %v ± %v", r.Slope, r.SlopeSigma, slope, sigma)
	}
}

// within picks the values whose depth is in [from, to).
func within(values, depth []float64, from, to Number) (list []float64) {
	for i, d := range depth {
		if d >= float64(from) && d < float64(to) {
			list = append(list, values[i])
		}
	}
	return list
}

func checkByDepth(t *testing.T, r *CheckReport, residual, depth []float64) {
	t.Helper()
	if n := len(r.ByDepth); n < 4 || n > maxBands {
		t.Errorf("%d bands", n)
	}
	count := 0
	for _, b := range r.ByDepth {
		list := within(residual, depth, b.From, b.To)
		if b.Count != len(list) {
			t.Errorf("band %v to %v has %d points, want %d", b.From, b.To, b.Count, len(list))
		} else if len(list) > 0 {
			checkResiduals(t, "a band", b.Residuals, list)
		}
		count += b.Count
	}
	if count != len(residual) {
		t.Errorf("bands have %d points, want %d", count, len(residual))
	}
}

// checkShares counts by the formula of IHO S-44 Ed. 6.0.0, section 3.2.3, with the
// coefficients of its Table 1 written out.
func checkShares(t *testing.T, r *CheckReport, residual, depth []float64) {
	t.Helper()
	for name, c := range map[string][2]float64{"exclusive": {0.15, 0.0075}, "special": {0.25, 0.0075}, "1": {0.5, 0.013}, "2": {1, 0.023}} {
		n := 0.0
		for i, v := range residual {
			if v*v <= c[0]*c[0]+c[1]*depth[i]*c[1]*depth[i] {
				n++
			}
		}
		if !isNear(r.S44[name], n/float64(len(residual)), 1e-12) {
			t.Errorf("order %s: %v, want %v", name, r.S44[name], n/float64(len(residual)))
		}
	}
	if s := r.S44["exclusive"]; !(s > 0.5 && s < 1) {
		t.Errorf("exclusive is %v: the test tells nothing", s)
	}
}

// TestTVULimit: IHO S-44 Ed. 6.0.0 (2020), Table 1 and section 3.2.3.
func TestTVULimit(t *testing.T) {
	data, err := os.ReadFile(filepath.Join("..", "..", "testdata", "s44_tvu.json"))
	if err != nil {
		t.Fatal(err)
	}
	var file struct {
		Entries []struct {
			Quantity  string
			Inputs    map[string]float64
			Value     any
			Tolerance float64
			Source    string
		}
	}
	if err := json.Unmarshal(data, &file); err != nil {
		t.Fatal(err)
	}
	names := map[string]string{"Exclusive": "exclusive", "Special": "special", "1a": "1", "1b": "1", "2": "2"}
	compared := 0
	for _, e := range file.Entries {
		name := names[strings.Fields(e.Quantity)[1]]
		switch v := e.Value.(type) {
		case float64:
			if got := TVULimit(name, e.Inputs["depth_m"]); !(math.Abs(got-v) <= e.Tolerance) {
				t.Errorf("%s at %g m is %v, want %v (%s)", e.Quantity, e.Inputs["depth_m"], got, v, e.Source)
			}
		case []any: // a, b
			if got := TVULimit(name, 0); got != v[0] {
				t.Errorf("%s: a is %v, want %v (%s)", e.Quantity, got, v[0], e.Source)
			}
			if got := TVULimit(name, 1e9) / 1e9; math.Abs(got-v[1].(float64)) > 1e-12 {
				t.Errorf("%s: b is %v, want %v (%s)", e.Quantity, got, v[1], e.Source)
			}
		}
		compared++
	}
	if compared < 30 {
		t.Errorf("only %d values were compared", compared)
	}
	if !math.IsNaN(TVULimit("3", 1)) {
		t.Error("there is an order 3")
	}
}

// By hand: of 1, 2, 3, 4 the 95th percentile lies 0.85 behind the third.
func TestPercentile(t *testing.T) {
	for _, c := range []struct {
		values []float64
		want   float64
	}{{[]float64{4, 1, 3, 2}, 3.85}, {[]float64{7}, 7}, {[]float64{1, 3}, 2.9}} {
		if got := percentile(c.values, 0.95); math.Abs(got-c.want) > 1e-12 {
			t.Errorf("%v: %v, want %v", c.values, got, c.want)
		}
	}
}

// In feet the figures are those in metres over 0.3048, and the shares within the limits,
// which are in metres, the same.
func TestCheckInFeet(t *testing.T) {
	raw, corrected, check := checkedCloud(20_000, 300)
	feet := func(s sheet) sheet {
		s = s.clone()
		for i, name := range s[0] {
			if !slices.Contains([]string{"x", "y", "z", "x_raw", "y_raw", "z_raw", "depth", "water_level"}, name) {
				continue
			}
			for _, row := range s[1:] {
				v, _ := strconv.ParseFloat(row[i], 64)
				row[i] = exact(v / 0.3048)
			}
		}
		return s
	}
	folder := t.TempDir()
	compare := func(name string, raw, corrected, check sheet, o Options) *CheckReport {
		o.Check = check.write(t, filepath.Join(folder, name+"-check.csv"))
		path := corrected.write(t, filepath.Join(folder, name, "true.parquet"))
		rawPath := raw.write(t, filepath.Join(folder, name, "raw.parquet"))
		bytes, sum, err := receipt.Hash(t.Context(), rawPath)
		if err != nil {
			t.Fatal(err)
		}
		input := fmt.Sprintf(`[{"use": "cloud", "path": "true.parquet", "bytes": %d, "sha256": %q}]`, bytes, sum)
		job := `{"run": "a1", "job": {"input": {"unit": "` + name + `", "vertical_unit": "` + name + `"}}, "inputs": ` + input + `, "output": {"path": "true.parquet"}, "rows_written": 20000, "outcomes": {"corrected": 20000}}`
		writeFile(t, path+".receipt.json", job)
		r, err := Diff(t.Context(), rawPath, path, o)
		if err != nil || !r.Holds || r.Unit != name {
			t.Fatal(err, r.Findings)
		}
		return r.Check
	}
	m := compare("m", raw, corrected, check, Options{Reach: 2})
	ft := compare("ft", feet(raw), feet(corrected), feet(check), Options{Reach: 2 / 0.3048})
	if ft.Count != 300 || !isNear(ft.Bias, float64(m.Bias)/0.3048, 1e-8) || !isNear(ft.RMSE, float64(m.RMSE)/0.3048, 1e-8) || !isNear(ft.Slope, float64(m.Slope), 1e-8) {
		t.Errorf("in feet %+v, in metres %+v", ft.Residuals, m.Residuals)
	}
	for name, share := range m.S44 {
		if ft.S44[name] != share {
			t.Errorf("order %s: %v in feet, %v in metres", name, ft.S44[name], share)
		}
	}
}
