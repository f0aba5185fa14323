package picture

import (
	"bytes"
	"errors"
	"image"
	"image/color"
	"image/png"
	"math"
	"os"
	"path/filepath"
	"testing"
	"time"

	"gonum.org/v1/plot"
	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"
	"gonum.org/v1/plot/vg/vgimg"

	"bentray/pipeline"
)

// slopeMap is the level of a plane that rises to the east, with a hole.
func slopeMap(columns, rows int) *pipeline.LevelMap {
	m := &pipeline.LevelMap{Level: pipeline.Range{Low: 0, High: float64(columns - 1)}}
	for i := range columns {
		m.X = append(m.X, 412_000+2*float64(i))
	}
	for k := range rows {
		m.Y = append(m.Y, 6_213_000+2*float64(k))
		for i := range columns {
			level := float64(i)
			if k == 0 && i == columns/2 {
				level = math.NaN()
			}
			m.Levels = append(m.Levels, level)
		}
	}
	return m
}

func fitted(n int) pipeline.FitReport {
	var f pipeline.FitReport
	for i := range n {
		p := pipeline.FittedPoint{X: 412_000 + float64(i), Y: 6_213_010, Z: 1, Chainage: float64(i), Residual: 0.01 * float64(i%3-1)}
		if i%7 == 6 {
			p.Aside, p.Residual, p.Z = true, 1.5, 2.5
		}
		f.Points = append(f.Points, p)
	}
	f.Points[0].Chainage, f.Points[0].Residual = math.NaN(), math.NaN() // beyond reach
	return f
}

func reports() map[string]*pipeline.SurfaceReport {
	fit := fitted(60)
	curve := []pipeline.CurvePoint{{Chainage: 0, Level: 1, Sigma: 0.01}, {Chainage: 60, Level: 0.9, Sigma: 0.01}}
	at := time.Date(2026, 5, 1, 10, 0, 0, 0, time.UTC)
	gauge := &pipeline.GaugeReport{
		Series: []pipeline.GaugeSeries{{UTC: []float64{0, 60, 600}, Level: []float64{1, 1.1, 1.2}}}, Records: 3, Gaps: 1, MaxGap: 300,
		From: at, To: at.Add(time.Hour), Level: pipeline.Range{Low: 1, High: 1.2},
	}
	plane := &pipeline.PlaneReport{Fit: &fit}
	plane.Fit.Points = plane.Fit.Points[1:]
	zones := slopeMap(40, 30)
	zones.At = &pipeline.Moment{Time: at}
	zones.Outlines = []pipeline.Outline{{Name: "lock", XY: [][2]float64{{412_010, 6_213_010}, {412_030, 6_213_010}, {412_020, 6_213_030}, {412_010, 6_213_010}}}}
	few := &pipeline.ProfileReport{Fit: fitted(3), Curve: []pipeline.CurvePoint{{Chainage: 0, Level: 1, Sigma: math.NaN()}, {Chainage: 2, Level: 0.9, Sigma: math.NaN()}}}
	few.Fit.Sigma = math.NaN()
	flat := slopeMap(30, 3)
	flat.Level = pipeline.Range{Low: 5, High: 5}
	for i := range flat.Levels {
		flat.Levels[i] = 5
	}
	return map[string]*pipeline.SurfaceReport{
		"plane":    {Plane: plane, Map: slopeMap(200, 40)},
		"profile":  {Profile: &pipeline.ProfileReport{Fit: fitted(60), Curve: curve}, Map: slopeMap(40, 200), Gauge: gauge},
		"few":      {Profile: few, Map: slopeMap(40, 20)},
		"gauge":    {Gauge: gauge},
		"zones":    {Map: zones},
		"flat map": {Map: flat},
		"a row":    {Map: slopeMap(50, 1)},
	}
}

// Each kind gives a PNG of the page's width that is not blank, the same each time.
func TestSurfacePictures(t *testing.T) {
	for name, r := range reports() {
		t.Run(name, func(t *testing.T) {
			var one, two bytes.Buffer
			if err := errors.Join(Surface(&one, r), Surface(&two, r)); err != nil {
				t.Fatal(err)
			}
			if !bytes.Equal(one.Bytes(), two.Bytes()) {
				t.Error("two pictures of one report differ")
			}
			picture, err := png.Decode(&one)
			if err != nil {
				t.Fatal(err)
			}
			if width := picture.Bounds().Dx(); width != 1039 { // 24 cm at 110 pixels an inch
				t.Errorf("picture is %d pixels wide, want 1039", width)
			}
			if share := inked(picture); share < 0.005 || share > 0.9 {
				t.Errorf("%.1f %% of the picture is not white", 100*share)
			}
		})
	}
}

func inked(m image.Image) float64 {
	dark, b := 0, m.Bounds()
	for y := b.Min.Y; y < b.Max.Y; y++ {
		for x := b.Min.X; x < b.Max.X; x++ {
			if color.GrayModel.Convert(m.At(x, y)).(color.Gray).Y < 250 {
				dark++
			}
		}
	}
	return float64(dark) / float64(b.Dx()*b.Dy())
}

// A used point on the darkest colour of a map has a white rim around its own colour.
func TestPointsStandOutFromDarkWater(t *testing.T) {
	canvas := vgimg.NewWith(vgimg.UseWH(20, 20), vgimg.UseDPI(300))
	c := draw.New(canvas)
	c.FillPolygon(levelColours[0], []vg.Point{{}, {X: 20}, {X: 20, Y: 20}, {Y: 20}})
	c.DrawGlyph(usedGlyph, vg.Point{X: 10, Y: 10})
	picture, across := canvas.Image(), map[color.RGBA]int{}
	middle := picture.Bounds().Dy() / 2
	for x := range picture.Bounds().Dx() {
		across[color.RGBAModel.Convert(picture.At(x, middle)).(color.RGBA)]++
	}
	if rim, own := across[color.RGBA{R: 255, G: 255, B: 255, A: 255}], across[used]; rim < 4 || own < 10 {
		t.Errorf("across the point %d pixels are white and %d of its colour, want 4 and 10 at least", rim, own)
	}
}

// A zone outside the frame leaves no trace; one that reaches into it does.
func TestOnlyZonesInTheFrameHaveNames(t *testing.T) {
	draw := func(zones ...pipeline.Outline) []byte {
		m := slopeMap(40, 30)
		m.Outlines = zones
		var b bytes.Buffer
		if err := Surface(&b, &pipeline.SurfaceReport{Map: m}); err != nil {
			t.Fatal(err)
		}
		return b.Bytes()
	}
	far := pipeline.Outline{Name: "far", XY: [][2]float64{{412_900, 6_213_010}, {412_930, 6_213_010}, {412_930, 6_213_040}, {412_900, 6_213_010}}}
	part := pipeline.Outline{Name: "part", XY: [][2]float64{{412_060, 6_213_010}, {412_930, 6_213_010}, {412_930, 6_213_040}, {412_060, 6_213_010}}}
	if !bytes.Equal(draw(), draw(far)) {
		t.Error("a zone outside the frame changes the picture, want no outline and no name of it")
	}
	if bytes.Equal(draw(), draw(part)) {
		t.Error("a zone that reaches into the frame does not change the picture, want its outline and name")
	}
}

func TestNothingToDraw(t *testing.T) {
	level := 0.42
	path := filepath.Join(t.TempDir(), "surface.png")
	if err := WriteSurface(path, &pipeline.SurfaceReport{Level: &level}); !errors.Is(err, ErrNothing) {
		t.Errorf("error is %v, want ErrNothing", err)
	}
	if _, err := os.Stat(path); err == nil {
		t.Error("a file is left")
	}
}

// Colours keep their order in grey (luma of ITU-R BT.601, as image/color has it) and
// for eyes without red or without green, which see little but blue against yellow.
func TestColoursKeepTheirOrder(t *testing.T) {
	scale := colours(1, 2)
	last, lastYellow := -1, math.MinInt32
	for i := range 21 {
		c, err := scale.At(1 + float64(i)/20)
		if err != nil {
			t.Fatal(err)
		}
		grey := int(color.GrayModel.Convert(c).(color.Gray).Y)
		r, g, b, _ := c.RGBA()
		yellow := (int(r)+int(g))/2 - int(b)
		if grey <= last+5 || yellow < lastYellow-1000 {
			t.Errorf("step %d: grey %d after %d, yellow less blue %d after %d", i, grey, last, yellow, lastYellow)
		}
		last, lastYellow = grey, yellow
	}
}

// A length is as long on one axis as on the other, whatever the shape of the map.
func TestEqualScale(t *testing.T) {
	for _, shape := range [][2]float64{{100, 10}, {10, 100}, {50, 50}, {1, 3000}} {
		p := newPlot("x", "y")
		p.X.Min, p.X.Max, p.Y.Min, p.Y.Max = 412_000, 412_000+shape[0], 6_213_000, 6_213_000+shape[1]
		c := draw.New(vgimg.New(20*vg.Centimeter, 12*vg.Centimeter))
		equalScale(p, c)
		data := p.DataCanvas(c)
		perX := (p.X.Max - p.X.Min) / float64(data.Max.X-data.Min.X)
		perY := (p.Y.Max - p.Y.Min) / float64(data.Max.Y-data.Min.Y)
		if !(math.Abs(perX/perY-1) < 0.01) {
			t.Errorf("%v: a point of paper is %g in x and %g in y", shape, perX, perY)
		}
		if p.X.Max-p.X.Min < shape[0]*(1-1e-9) || p.Y.Max-p.Y.Min < shape[1]*(1-1e-9) {
			t.Errorf("%v: the map is cut", shape)
		}
	}
}

func labels(ticks []plot.Tick) (texts []string) {
	for _, tick := range ticks {
		texts = append(texts, tick.Label)
	}
	return texts
}

func TestTicks(t *testing.T) {
	at := func(hour, minute, second int) float64 {
		return float64(time.Date(2026, 5, 1, hour, minute, second, 0, time.UTC).Unix())
	}
	for _, c := range []struct {
		name      string
		ticker    plot.Ticker
		low, high float64
		want      string
	}{
		{"coordinates", rounds(4), 412_010, 412_330, "412 100|412 200|412 300"},
		{"millimetres", rounds(4), -0.0021, 0.0019, "-0.002|-0.001|0.000|0.001"},
		{"tenths", rounds(5), 0.84, 1.26, "0.9|1.0|1.1|1.2"},
		{"minutes", clock(9), at(10, 2, 5), at(10, 9, 0), "10:03|10:04|10:05|10:06|10:07|10:08|10:09"},
		{"seconds", clock(4), at(10, 2, 5), at(10, 2, 25), "10:02:05|10:02:10|10:02:15|10:02:20|10:02:25"},
		{"days", clock(5), at(0, 0, 0), at(23, 0, 0) + 2*86400, "2026-05-01|2026-05-02|2026-05-03"},
	} {
		t.Run(c.name, func(t *testing.T) {
			got := ""
			for i, text := range labels(c.ticker.Ticks(c.low, c.high)) {
				if i > 0 {
					got += "|"
				}
				got += text
			}
			if got != c.want {
				t.Errorf("ticks are %q, want %q", got, c.want)
			}
		})
	}
}
