package demo

import (
	"encoding/json"
	"errors"
	"fmt"
	"path/filepath"

	"bentray/io/atomicfile"
)

// The files of the river's folder, which lies below the cove's.
const (
	riverFolder   = "river"
	riverJobFile  = "river.toml"
	zoneFile      = "zones.geojson"
	waterlineFile = "waterline.csv"
	gaugeFile     = "gauge.csv"
)

func newRiver(folder string) *Survey {
	in := func(name string) string { return filepath.Join(folder, name) }
	return &Survey{
		Title: RiverTitle, Job: in(riverJobFile), Trajectory: in(trajectoryFile), Polygons: in(zoneFile),
		Waterline: in(waterlineFile), Gauge: in(gaugeFile),
		Raw: in(rawFolder), Corrected: in(outputFolder), Truth: in(truthFolder), LimitM: FitM, bandM: 2,
	}
}

func (s *Survey) writeRiver() error {
	lines := riverLines()
	tiles, err := fillRiver(lines)
	if err != nil {
		return err
	}
	if err := s.makeFolders(tiles); err != nil {
		return err
	}
	return errors.Join(
		atomicfile.Write(s.Job, riverJobText()), // first, as the cove's
		atomicfile.Write(s.Polygons, zoneText(riverWaters())),
		atomicfile.Write(s.Waterline, waterlineText()),
		atomicfile.Write(s.Gauge, gaugeText()),
		atomicfile.Write(s.Trajectory, trajectoryText(lines)),
		s.writeTiles(tiles),
	)
}

// fillRiver fires the pulses over the river and returns its tiles.
func fillRiver(lines []*flightLine) ([]*tile, error) {
	shooter, err := newRiverShooter()
	if err != nil {
		return nil, err
	}
	tiles := namedTiles("upper.csv", "lower.parquet")
	for _, l := range lines {
		for pulse := 0; pulse < lineS*pulsesPerS; pulse += riverEvery {
			shot, ok := shooter.fire(l, pulse)
			switch {
			case !ok:
			case shot.apparent.x < riverX+reachEndM/2:
				tiles[0].add(&shot)
			default:
				tiles[1].add(&shot)
			}
		}
	}
	return tiles, nil
}

// zoneText is the river's zones as GeoJSON (RFC 7946).
func zoneText(waters []water) []byte {
	features := []any{}
	for _, w := range waters[1:] {
		properties := map[string]any{"name": w.name, "temperature": w.temperatureC, "salinity": w.salinity}
		if w.hasLevel {
			properties["level"] = w.surface.at.z
		}
		features = append(features, map[string]any{
			"type": "Feature", "properties": properties,
			"geometry": map[string]any{"type": "Polygon", "coordinates": []ring{w.outline}},
		})
	}
	text, err := json.Marshal(map[string]any{"type": "FeatureCollection", "features": features})
	if err != nil {
		panic("demo: " + err.Error()) // finite numbers have JSON
	}
	return append(text, '\n')
}

func riverJobText() []byte {
	own := riverWaters()[0]
	return fmt.Appendf(nil, `title = %q

[input]
files = ["%s/*.csv", "%[2]s/*.parquet"]

[output]
folder = %[3]q

[water]
temperature = %.1f # degrees C, of the river
salinity    = %.1f
zones       = %q # with waters, or levels, of their own

[air]
temperature = %.1f # degrees C
humidity    = %.0f   # percent

[surface.plane]
waterline = %q # points on both banks

[surface.gauge]
file    = %q
zero    = -%.3f # m: the gauge adds nothing where it reads what it did with the waterline
max_gap = %.0f # s

[rays]
model      = "pulse"
trajectory = %q
`, RiverTitle, rawFolder, outputFolder, own.temperatureC, own.salinity, zoneFile, airTemperatureC, humidityPercent,
		waterlineFile, gaugeFile, readingM, gaugeMaxGapS, trajectoryFile)
}
