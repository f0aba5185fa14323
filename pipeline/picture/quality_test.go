package picture

import (
	"bytes"
	"encoding/base64"
	"encoding/xml"
	"errors"
	"fmt"
	"image/color"
	"image/png"
	"io"
	"math"
	"strings"
	"testing"

	"bentray/pipeline/quality"
)

// comparison has something to draw in every figure.
func comparison() *quality.Report {
	nan := math.NaN()
	r := &quality.Report{
		Unit: "m", VerticalUnit: "m",
		Map: &quality.Map{X: 412_000, Y: 6_213_000, Cell: 4, Cols: 3, Rows: 2, Count: []int64{1, 1, 1, 1, 0, 1}, MeanDZ: []float64{0.2, 1.2, 2.2, 3.2, nan, 5.2}},
		Sections: []quality.Section{{Name: "along", X0: 412_000, Y0: 6_213_004, X1: 412_012, Y1: 6_213_004, Points: []quality.SectionPoint{
			{At: 0, Corrected: -1, RawAt: 0.1, Raw: -1.3, Level: 0.4}, {At: 6, Corrected: -2, RawAt: 6.1, Raw: -2.6, Level: 0.4}, {At: 12, Corrected: -3, RawAt: 12.1, Raw: -4, Level: nan},
		}}},
		ByDepth:     []quality.DepthBand{{From: 0, To: 5, Shift: quality.Shift{MeanDZ: 1, MeanDH: 0.2}}, {From: 5, To: 10, Shift: quality.Shift{MeanDZ: quality.Number(nan), MeanDH: quality.Number(nan)}}},
		ByIncidence: []quality.IncidenceBand{{From: 0, To: 5, Shift: quality.Shift{MeanDZ: 1}, MeanDepth: 4}, {From: 10, To: 15, Shift: quality.Shift{MeanDZ: 1.1}, MeanDepth: 4}},
		Histograms:  quality.Histograms{DZ: &quality.Histogram{Width: 1, Counts: []int64{3, 0, 7}}, DH: &quality.Histogram{Width: 1, Counts: []int64{1}}, Depth: &quality.Histogram{Width: 1, Counts: []int64{5, 5}}},
		Check:       &quality.CheckReport{Residuals: quality.Residuals{Bias: 0.01, P95: 0.08}, Slope: 0.001, S44: map[string]quality.Number{"exclusive": 0.9, "special": 1}},
		Overlap:     &quality.OverlapReport{ByDepth: []quality.OverlapBand{{From: 0, To: 5, Residuals: quality.Residuals{Bias: 0.01, P95: 0.02}}}},
	}
	for i := range 40 {
		r.Check.Points = append(r.Check.Points, quality.CheckPoint{X: 412_001, Y: 6_213_001, Depth: float64(i) / 5, Residual: 0.01 * float64(i%9-4)})
	}
	r.Check.Points[7].Residual = 25 // a blunder
	r.Check.Points[8].Residual = nan
	return r
}

func figures() map[string]func(*quality.Report) SVG {
	return map[string]func(*quality.Report) SVG{
		"map": ShiftMap, "depth": ShiftByDepth, "incidence": ShiftByIncidence, "histograms": ShiftHistograms, "check": CheckErrors, "overlap": Overlap,
		"section": func(r *quality.Report) SVG { return Section(r, 0) },
	}
}

// texts are the words of a figure; its syntax must be right, and no number unknown.
func texts(t *testing.T, svg SVG) (words []string) {
	t.Helper()
	d := xml.NewDecoder(strings.NewReader(string(svg)))
	inText := false
	for {
		token, err := d.Token()
		switch token := token.(type) {
		case xml.StartElement:
			inText = token.Name.Local == "text"
			for _, a := range token.Attr {
				if strings.Contains(a.Value, "NaN") || strings.Contains(a.Value, "Inf") {
					t.Errorf("%s: %s is %q", token.Name.Local, a.Name.Local, a.Value)
				}
			}
		case xml.CharData:
			if inText {
				words = append(words, string(token))
			}
		case xml.EndElement:
			inText = false
		}
		if errors.Is(err, io.EOF) {
			return words
		}
		if err != nil {
			t.Fatal(err)
		}
	}
}

// Each figure is one element, the same each time, and says what is drawn, in which unit.
func TestFigures(t *testing.T) {
	words := map[string]string{
		"map": "x (east), ft|y (north), ft|Mean shift in height, us-ft|check point|unmatched|A|A'", "depth": "depth, us-ft|mean shift, us-ft (height), ft (plan)|points|height (positive: up)",
		"incidence": "incidence, degrees|in plan", "histograms": "shift in height, us-ft (positive: up)|shift in plan, ft|points",
		"check":   "depth, us-ft|error, us-ft (plus: too shallow)|exclusive: 90.0 %|special: 100.0 %|beyond the frame|mean|slope|magnified",
		"overlap": "depth, us-ft|difference, us-ft|95 % of magnitudes", "section": "along the section, ft|height, us-ft|raw|corrected|water|A to A'",
	}
	for name, draw := range figures() {
		t.Run(name, func(t *testing.T) {
			r := comparison()
			r.Unit, r.VerticalUnit = "ft", "us-ft"
			svg := draw(r)
			if svg != draw(r) {
				t.Error("two figures of one report differ")
			}
			if !strings.HasPrefix(string(svg), "<svg viewBox=") || strings.Count(string(svg), "<svg") != 1 {
				t.Errorf("the figure begins with %.40q", svg)
			}
			got := "|" + strings.Join(texts(t, svg), "|") + "|"
			for _, want := range strings.Split(words[name], "|") {
				if !strings.Contains(got, "|"+want+"|") {
					t.Errorf("the words are %q, want %q too", got, want)
				}
			}
		})
	}
}

// The map's pixels are its cells, north up, in the colour of the class that holds the mean.
func TestMapShowsItsCells(t *testing.T) {
	r := comparison()
	_, rest, _ := strings.Cut(string(ShiftMap(r)), "data:image/png;base64,")
	text, _, _ := strings.Cut(rest, `"`)
	data, err := base64.StdEncoding.DecodeString(text)
	if err != nil {
		t.Fatal(err)
	}
	picture, err := png.Decode(bytes.NewReader(data))
	if err != nil {
		t.Fatal(err)
	}
	if size := picture.Bounds().Size(); size.X != 3 || size.Y != 2 {
		t.Fatalf("the picture has %v pixels, want 3 by 2", size)
	}
	grey := func(col, row int) int {
		return int(color.GrayModel.Convert(picture.At(col, 1-row)).(color.Gray).Y)
	}
	last := -1
	for _, cell := range [][2]int{{0, 0}, {1, 0}, {2, 0}, {0, 1}, {2, 1}} { // with rising shift
		if now := grey(cell[0], cell[1]); now <= last {
			t.Errorf("cell %v has grey %d after %d", cell, now, last)
		} else {
			last = now
		}
	}
	if _, _, _, alpha := picture.At(1, 0).RGBA(); alpha != 0 {
		t.Error("the cell without a point has a colour")
	}
}

func TestClasses(t *testing.T) {
	for _, c := range []struct {
		values    []float64
		low, step float64
		count     int
	}{
		{[]float64{0.1, 4.4}, 0, 0.5, 9},
		{[]float64{-0.031, 0.012}, -0.035, 0.005, 10},
		{[]float64{2, 2, math.NaN()}, 2, 0.0001, 1},
	} {
		got := newClasses(c.values)
		if len(got.colours) != c.count || math.Abs(got.low-c.low) > 1e-9 || math.Abs(got.step-c.step) > 1e-9 {
			t.Errorf("%v: %d classes of %g from %g, want %d of %g from %g", c.values, len(got.colours), got.step, got.low, c.count, c.step, c.low)
		}
	}
	var spike []float64
	for i := range 1000 {
		spike = append(spike, float64(i)/1000)
	}
	if got := newClasses(append(spike, 500, -800)); got.step > 0.1 {
		t.Errorf("a spike makes classes of %g, want 0.1", got.step)
	}
}

// What is thinned is spread over the whole, and never more than is asked for.
func TestThinned(t *testing.T) {
	for _, n := range []int{0, 1, 9, 10, 11, 19, 20, 21, 1000} {
		list := make([]int, n)
		for i := range list {
			list[i] = i
		}
		got := thinned(list, 10)
		if len(got) > 10 || n <= 10 && len(got) != n || n > 10 && len(got) < 5 {
			t.Errorf("%d of %d are kept", len(got), n)
		}
		if n > 10 && got[len(got)-1] < n*4/5 {
			t.Errorf("the last of %d that is kept is %d", n, got[len(got)-1])
		}
	}
}

// The water line ends where there is no water for a while.
func TestWaterLineHasGaps(t *testing.T) {
	s := &quality.Section{}
	for at := 0.0; at <= 60; at += 0.25 {
		p := quality.SectionPoint{At: at, Level: 1}
		if at > 20 && at < 40 {
			p.Level = math.NaN()
		}
		if at >= 40 {
			p.Level = 2
		}
		s.Points = append(s.Points, p)
	}
	got := ""
	for _, run := range levels(s, 60) {
		got += fmt.Sprintf("%.0f to %.0f at %g and %g; ", run[0].X, run[len(run)-1].X, run[0].Y, run[len(run)-1].Y)
	}
	if want := "0 to 21 at 1 and 1; 40 to 60 at 2 and 2; "; got != want {
		t.Errorf("the water line is %q, want %q", got, want)
	}
}
