package page

import (
	"bytes"
	"encoding/json"
	"fmt"
	"math"
	"math/rand/v2"
	"testing"

	"bentray/pipeline/quality"
	"bentray/pipeline/receipt"
)

const settings = `{"input": {"unit": "m", "vertical_unit": "m"}, "water": {"temperature": 17.5, "salinity": 34.9, "formula": "quan-fry"},
 "air": {"temperature": 18, "pressure": 1013.25, "humidity": 60}, "surface": {"level": 0.42}, "extent": {"polygons": "water.geojson"},
 "sensor": [ {"rays": {"model": "pulse", "trajectory": "flight.csv"}} ]}`

func shift(n int64, dz float64) quality.Shift {
	v := quality.Number(dz)
	return quality.Shift{Count: n, MeanDZ: v, RMSDZ: v, MaxDZ: 1.5 * v, MeanDH: v / 4, RMSDH: v / 4, MaxDH: v / 2}
}

// plainReport is what every comparison has.
func plainReport() *quality.Report {
	r := &quality.Report{
		Raw: "raw", Corrected: "true", Holds: true, Rows: 1000, RowsRaw: 1000, Unit: "m", VerticalUnit: "m", UnitKnown: true,
		Outcomes: map[string]int64{"corrected": 800, "dry": 150, "outside": 50}, FindingCounts: map[string]int64{},
		Files: []quality.FileReport{{Name: "tile.csv", Rows: 1000, RowsRaw: 1000, Holds: true, InputSHA256: "11aa", OutputSHA256: "22bb"}},
		Settings: []quality.Setting{{
			Run: "0123456789abcdef", Program: "bentray 0", Job: json.RawMessage(settings), Files: 1,
			Auxiliary: []receipt.Input{{Use: "trajectory", File: receipt.File{Path: "flight.csv", Bytes: 20913, SHA256: "33cc"}}},
			Ranges:    map[string][2]float64{"n_water": {1.342, 1.342}, "depth": {0.1, 11.9}},
		}},
		Shift: shift(800, 1.8), Cautions: []string{"for mapping work, not for navigation"},
		Histograms: quality.Histograms{
			DZ: &quality.Histogram{From: 0, Width: 0.5, Counts: []int64{100, 400, 0, 300}}, DH: &quality.Histogram{From: 0, Width: 0.1, Counts: []int64{500, 300}},
			Depth: &quality.Histogram{From: 0, Width: 2, Counts: []int64{100, 300, 400}},
		},
	}
	for i := range 6 {
		from := quality.Number(2 * i)
		r.ByDepth = append(r.ByDepth, quality.DepthBand{From: from, To: from + 2, Shift: shift(100, 0.3+0.6*float64(i))})
	}
	return r
}

// shown adds a map, sections and incidences.
func shown(r *quality.Report) *quality.Report {
	m := &quality.Map{X: 412_000, Y: 6_213_000, Cell: 4, Cols: 60, Rows: 40}
	for i := range m.Cols * m.Rows {
		dz := float64(i%m.Cols) / 15
		if i%m.Cols > 50 && i/m.Cols > 30 {
			dz = math.NaN()
		}
		m.MeanDZ, m.MeanDH, m.Count = append(m.MeanDZ, dz), append(m.MeanDH, dz/4), append(m.Count, 3)
	}
	r.Map = m
	for _, name := range []string{"along", "across, at a third"} {
		s := quality.Section{Name: name, X0: 412_010, Y0: 6_213_080, X1: 412_210, Y1: 6_213_080, Halfwidth: 3, SampledShare: 0.5}
		for i := range 1500 {
			at := float64(i) * 200 / 1500
			depth := 6 + 4*math.Sin(at/40)
			s.Points = append(s.Points, quality.SectionPoint{At: at, Corrected: 0.42 - depth, RawAt: at + 0.2, Raw: 0.42 - 1.34*depth, Level: 0.42})
		}
		r.Sections = append(r.Sections, s)
	}
	for i := range 4 {
		from := quality.Number(5 * i)
		r.ByIncidence = append(r.ByIncidence, quality.IncidenceBand{From: from, To: from + 5, Shift: shift(200, 1.9), MeanDepth: 5})
	}
	return r
}

func residuals(v float64) quality.Residuals {
	n := quality.Number(v)
	return quality.Residuals{Bias: n / 3, RMSE: n / 2, Std: n / 2, P95: n}
}

// checked adds check points, of which the last is unmatched.
func checked(r *quality.Report, points int) *quality.Report {
	c := &quality.CheckReport{
		File: "check.csv", Match: "plane", Reach: 0.5, Given: points, Count: points - 1, Unmatched: 1, Residuals: residuals(0.06),
		Slope: 0.001, SlopeSigma: 0.002, Meaning: "no slope", S44: map[string]quality.Number{"exclusive": 0.97, "special": 1, "1": 1, "2": 1},
		ByDepth: []quality.CheckBand{{From: 0, To: 5, Count: points / 2, Residuals: residuals(0.05)}, {From: 5, To: 10, Count: points / 2, Residuals: residuals(0.07)}},
	}
	rng := rand.New(rand.NewPCG(3, 9))
	for i := range points {
		p := quality.CheckPoint{X: 412_000 + 240*rng.Float64(), Y: 6_213_000 + 160*rng.Float64(), Depth: 10 * rng.Float64(), Residual: 0.03 * rng.NormFloat64()}
		if i == points-1 {
			p.Residual = math.NaN()
		}
		c.Points = append(c.Points, p)
	}
	r.Check = c
	return r
}

// overlapping adds flight lines.
func overlapping(r *quality.Report) *quality.Report {
	r.Overlap = &quality.OverlapReport{
		Column: "point_source_id", Cell: 4, Share: 1, Lines: 2, Count: 90, Difference: residuals(0.01),
		ByDepth:     []quality.OverlapBand{{From: 0, To: 5, Count: 40, Residuals: residuals(0.008)}, {From: 5, To: 10, Count: 50, Residuals: residuals(0.012)}},
		ByIncidence: []quality.OverlapBand{{From: 0, To: 10, Count: 90, Residuals: residuals(0.01)}},
		Pairs:       []quality.LinePair{{A: "1", B: "2", Count: 90, Residuals: residuals(0.01)}},
	}
	return r
}

// full has every section but that of findings.
func full() *quality.Report { return overlapping(checked(shown(plainReport()), 60)) }

// broken does not hold.
func broken() *quality.Report {
	r := plainReport()
	r.Holds, r.ColumnsChanged, r.FindingCounts = false, []string{"intensity"}, map[string]int64{"changed": 3, "dropped": 1}
	r.Findings = []quality.Finding{{File: "tile.csv", Kind: "changed", Text: `row 7: intensity is "8", want "7"`}}
	return r
}

// huge has lists and pictures as large as they get.
func huge() *quality.Report {
	r := overlapping(checked(shown(plainReport()), 50_000))
	rng := rand.New(rand.NewPCG(5, 1))
	m := &quality.Map{Cell: 1, Cols: quality.MapSide, Rows: quality.MapSide}
	for range m.Cols * m.Rows {
		m.MeanDZ, m.Count = append(m.MeanDZ, rng.NormFloat64()), append(m.Count, 1)
	}
	r.Map = m
	for i := range 10_000 {
		r.Files = append(r.Files, quality.FileReport{Name: fmt.Sprintf("tile_%05d.parquet", i), Holds: true})
		r.Settings = append(r.Settings, r.Settings[0])
	}
	return r
}

func render(t testing.TB, r *quality.Report) string {
	t.Helper()
	var b bytes.Buffer
	if err := Render(&b, r); err != nil {
		t.Fatal(err)
	}
	return b.String()
}
