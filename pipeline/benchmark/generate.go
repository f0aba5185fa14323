package main

import (
	"fmt"
	"math"
	"os"
	"path/filepath"
	"strconv"
)

// columns are those of the survey. The ray origins are columns, so that both
// programs can compute the formula without a trajectory.
const columns = "x,y,z,gps_time,intensity,return_number,classification,origin_x,origin_y,origin_z"

// writeSurvey writes a survey of that many rows as CSV and syncs it, so that
// its writing back does not fall into a measurement. Coordinates have millimetre
// decimals and times microseconds; digits > 0 asks for that many significant
// digits instead.
func writeSurvey(path string, rows int64, digits int) (err error) {
	f, err := os.Create(path)
	if err != nil {
		return err
	}
	defer func() {
		if e := f.Close(); err == nil {
			err = e
		}
	}()
	const full = 1 << 20
	buf := append(make([]byte, 0, full+1024), columns+"\n"...)
	s := newSurvey()
	for range rows {
		if buf = appendPulse(buf, s.next(), digits); len(buf) >= full {
			if _, err = f.Write(buf); err != nil {
				return err
			}
			buf = buf[:0]
		}
	}
	if _, err = f.Write(buf); err != nil {
		return err
	}
	return f.Sync()
}

// appendPulse appends one row.
func appendPulse(b []byte, p pulse, digits int) []byte {
	b = appendXYZ(b, p.apparent, digits)
	b = appendNumber(append(b, ','), p.gpsTime, 1e6, digits)
	b = strconv.AppendInt(append(b, ','), p.intensity, 10)
	b = strconv.AppendInt(append(b, ','), p.returnNumber, 10)
	b = strconv.AppendInt(append(b, ','), classification, 10)
	b = appendXYZ(append(b, ','), p.origin, digits)
	return append(b, '\n')
}

func appendXYZ(b []byte, v vec, digits int) []byte {
	b = appendNumber(b, v.x, 1e3, digits)
	b = appendNumber(append(b, ','), v.y, 1e3, digits)
	return appendNumber(append(b, ','), v.z, 1e3, digits)
}

// appendNumber appends v rounded to whole parts of 1/scale (a power of ten), or
// with that many significant digits where digits > 0.
func appendNumber(b []byte, v float64, scale int64, digits int) []byte {
	if digits > 0 {
		return strconv.AppendFloat(b, v, 'g', digits, 64)
	}
	n := int64(math.Round(v * float64(scale)))
	if n < 0 {
		b, n = append(b, '-'), -n
	}
	b = append(strconv.AppendInt(b, n/scale, 10), '.')
	for part := scale / 10; part > 0; part /= 10 {
		b = append(b, byte('0'+n/part%10))
	}
	return b
}

// writeJob writes the job that corrects the file input of folder into
// folder/bentray-NAME, and returns its path.
func writeJob(folder, input, name string) (string, error) {
	path := filepath.Join(folder, "job-"+name+".toml")
	text := fmt.Sprintf(`title = "Gannet Sound, benchmark flight"

[input]
files = [%q]

[output]
folder     = %q
provenance = "full"

[water]
temperature = %g
salinity    = %g

[surface]
level = %g

[rays]
model = "pulse"
`, input, "bentray-"+name, temperatureC, salinityPSU, levelM)
	return path, os.WriteFile(path, []byte(text), 0o644)
}
