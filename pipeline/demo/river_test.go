package demo

import (
	"math"
	"strings"
	"testing"
	"time"

	"bentray/geo"
)

// The river as its doc says: water between the banks, land beyond, a side channel
// with water of its own.
func TestRiverBed(t *testing.T) {
	at := func(u, off float64) (x, y float64) { return riverX + u, riverY + axisV(u) + off }
	for _, c := range []struct {
		name                  string
		u, off, depth, within float64
		surface               plane
	}{
		{"middle of the river", 100, 0, channelMax, 1e-9, riverSurface},
		{"northern bank", 100, channelM, 0, 1e-9, riverSurface},
		{"southern bank", 500, -channelM, 0, 1e-9, riverSurface},
		{"land in the south", 100, -150, -landM, 1e-9, riverSurface},
		{"middle of the side channel", sideMidM, sideOffM, sideMax, 1e-9, sideSurface},
		{"end of the side channel", sideMidM + sideHalfM, sideOffM, 0, 1e-9, sideSurface},
	} {
		t.Run(c.name, func(t *testing.T) {
			x, y := at(c.u, c.off)
			near(t, "depth", c.surface.z(x, y)-riverBedZ(x, y), c.depth, c.within)
		})
	}
	x, y := at(sideMidM, channelM+17)
	if z := riverBedZ(x, y); z < sideLevelM {
		t.Errorf("the island is at %g m, want it above both waters", z)
	}
}

// The side channel's polygon holds its water and none of the river's, even where the
// river is at its highest; the polygons do not overlap.
func TestRiverZonesPartTheWaters(t *testing.T) {
	waters := riverWaters()
	for u := 0.0; u <= reachEndM; u += 2.5 {
		for off := -120.0; off <= 160; off += 1.5 {
			x, y := riverX+u, riverY+axisV(u)+off
			inSide := waters[1].outline.holds(x, y)
			switch wet := riverBedZ(x, y) < sideLevelM+riseM; {
			case inSide && waters[2].outline.holds(x, y):
				t.Fatalf("%g %g is in both zones", u, off)
			case off < channelM+15 && inSide:
				t.Fatalf("%g %g of the river is in the side channel's zone", u, off)
			case off > channelM+30 && wet && !inSide:
				t.Fatalf("%g %g of the side channel is not in its zone", u, off)
			}
		}
	}
	zones, err := geo.ParseZones(zoneText(waters))
	if err != nil || len(zones) != 2 || zones[0].Level != sideLevelM || !math.IsNaN(zones[1].Level) || zones[1].Salinity != 11.5 {
		t.Errorf("zones are %+v with error %v, want the side channel with its level and the brackish reach", zones, err)
	}
}

// The rise is that of the file of the gauge: linear by hand, at records, halfway
// and in the gap. 1.372 m is the reading at the waterline.
func TestRiseIsWhatTheFileSays(t *testing.T) {
	lines := strings.Split(strings.TrimSpace(string(gaugeText())), "\n")
	if len(lines) != 1+gaugeRecords-2 || lines[1] != "2026-05-19T10:02:05Z,1.372" || lines[9] != "2026-05-19T10:10:05Z,1.608" || !strings.HasPrefix(lines[10], "2026-05-19T10:13:05Z,") {
		t.Fatalf("the gauge's file is %q", lines)
	}
	for _, c := range []struct {
		at   string
		rise float64
		told bool
	}{
		{"2026-05-19T10:03:05Z", 0, true},
		{"2026-05-19T10:10:05Z", 0.236, true},
		{"2026-05-19T10:10:06Z", 0.2366, false},
		{"2026-05-19T10:12:00Z", 0.298, false},
		{"2026-05-19T10:14:35Z", 0.31, true},
	} {
		at, err := time.Parse(time.RFC3339, c.at)
		if err != nil {
			t.Fatal(err)
		}
		rise, told := riseAt(at.Sub(takeOff).Microseconds())
		near(t, "rise at "+c.at, rise, c.rise, 0.004)
		if told != c.told {
			t.Errorf("%s: told is %v, want %v", c.at, told, c.told)
		}
	}
	first, _ := riseAt(gaugeFirstS*1e6 + 7*60e6)
	second, _ := riseAt(gaugeFirstS*1e6 + 8*60e6)
	between, _ := riseAt(gaugeFirstS*1e6 + 7*60e6 + 15e6)
	near(t, "a quarter of a minute later", between, first+(second-first)/4, 1e-12)
}

// 600 points of which about 12 % are wrong, all to one side.
func TestWaterline(t *testing.T) {
	wrong := 0
	lines := strings.Split(strings.TrimSpace(string(waterlineText())), "\n")[1:]
	for _, l := range lines {
		x, y, z := fields(t, l)
		switch off := z - riverSurface.z(x, y); {
		case off > 0.02:
			wrong++
		case math.Abs(off) > 0.02 || off > blunderMaxM+0.02:
			t.Errorf("a point lies %g m off the water", off)
		}
		near(t, "depth at the bank", riverSurface.z(x, y)-riverBedZ(x, y), 0, 0.001)
	}
	if len(lines) != 600 || wrong < 50 || wrong > 90 {
		t.Errorf("%d of %d points are wrong, want about 72 of 600", wrong, len(lines))
	}
}

func fields(t *testing.T, line string) (x, y, z float64) {
	t.Helper()
	var v [3]float64
	for k, text := range strings.Split(line, ",") {
		v[k] = number(t, text)
	}
	return v[0], v[1], v[2]
}

// Each water sends points back, in each tile; in the gap of the gauge none has a level.
func TestRiverShots(t *testing.T) {
	shooter, err := newRiverShooter()
	if err != nil {
		t.Fatal(err)
	}
	seen := map[string]int{}
	for _, l := range riverLines() {
		for pulse := 0; pulse < lineS*pulsesPerS; pulse += 22 {
			shot, ok := shooter.fire(l, pulse)
			if !ok {
				seen["nothing"]++
				continue
			}
			seen[shot.outcome]++
			if shot.outcome == "corrected" {
				seen[shot.remark]++
			}
			if late := l.number == 13 && pulse > 5*pulsesPerS; late != (shot.outcome == "no_surface") {
				t.Fatalf("line %d, pulse %d is %s", l.number, pulse, shot.outcome)
			}
			if down := shot.bed.z - shot.apparent.z; (down > 0.005) != (shot.depth > 0) {
				t.Fatalf("a bed %g m deep is seen %g m deeper", shot.depth, down)
			}
		}
	}
	for _, what := range []string{"river", "side channel", "brackish reach", "dry", "no_surface"} {
		if seen[what] < 20 {
			t.Errorf("%d of the shots are %s, want more; they are %v", seen[what], what, seen)
		}
	}
}
