package pipeline

import (
	"math"
	"strings"
	"testing"

	"bentray/io/parquetfile"
)

// floatBits are the bytes of FLOAT values, for asFloats.
func floatBits(values ...float32) []int32 {
	bits := make([]int32, len(values))
	for i, v := range values {
		bits[i] = int32(math.Float32bits(v))
	}
	return bits
}

// roles is a table of two points or records, with one column in place of another.
func roles(t *testing.T, names string, in parquetfile.Column) string {
	t.Helper()
	values := map[string][]float64{"z": {-2, -3}, "origin_z": {400, 400}, "gps_time": {0, 1}}
	var columns []parquetfile.Column
	for _, name := range strings.Split(names, ",") {
		c := parquetfile.Column{Name: name, Values: values[name]}
		switch {
		case name == in.Name:
			c = in
		case values[name] == nil:
			c.Values = []float64{0, 0}
		}
		columns = append(columns, c)
	}
	return tableOf(t, 0, columns...)
}

// What a correction takes from a FLOAT column must have steps of 1 mm and 1 ms
// at most: at 20 000 the step is 2^-9 (24 bits from 2^14 on), at 4e8 it is 2^5.
func TestCoarseRoles(t *testing.T) {
	const (
		points  = "x,y,z,origin_x,origin_y,origin_z,tide"
		records = "gps_time,x,y,z"
		advice  = "; store it as DOUBLE or accept this with coarse = true in [input]"
	)
	byOrigin := tinyJob(`"raw/*.parquet"`, "true")
	byTime := byOrigin + "trajectory = \"flight.parquet\"\n"
	byColumn := strings.Replace(byOrigin, "level = 0", `column = "tide"`, 1)
	flat := parquetfile.Column{}
	late := parquetfile.Column{Name: "gps_time", Values: floatBits(4e8, 4e8+32)}
	for _, c := range []struct {
		name          string
		cloud, flight parquetfile.Column
		job, want     string
	}{
		{"origin", parquetfile.Column{Name: "origin_x", Values: floatBits(5, 20_000)}, flat, byOrigin, `column "origin_x" is FLOAT, whose step at 20000 is 0.002, want at most 0.001`},
		{"level", parquetfile.Column{Name: "tide", Values: floatBits(20_000, 0)}, flat, byColumn, `column "tide" is FLOAT, whose step at 20000 is 0.002, want at most 0.001`},
		{"time", late, flat, byTime, `column "gps_time" is FLOAT, whose step at 4.00000032e+08 is 32, want at most 0.001`},
		{"time of the trajectory", flat, late, byTime, `flight.parquet: column "gps_time" is FLOAT, whose step at 4.00000032e+08 is 32, want at most 0.001`},
		{"trajectory", flat, parquetfile.Column{Name: "y", Values: floatBits(0, 20_000)}, byTime, `flight.parquet: column "y" is FLOAT, whose step at 20000 is 0.002, want at most 0.001`},
	} {
		t.Run(c.name, func(t *testing.T) {
			names := points
			if c.job == byTime {
				names = "x,y,z,gps_time" // origins are added
			}
			f := files{"raw/a.parquet": roles(t, names, c.cloud), "flight.parquet": roles(t, records, c.flight)}
			for name, in := range map[string]string{"raw/a.parquet": c.cloud.Name, "flight.parquet": c.flight.Name} {
				if in != "" {
					f[name] = asFloats(t, f[name], in)
				}
			}
			if got := planError(t, f, c.job); !strings.HasSuffix(got, c.want+advice) {
				t.Errorf("the error is %s, want %s", got, c.want+advice)
			}
			if got := planError(t, f, strings.Replace(c.job, "[output]", "coarse = true\n[output]", 1)); got != "" {
				t.Errorf("with coarse = true the error is %s", got)
			}
		})
	}
}

// planError returns what a plan says of its only cloud, or of the job.
func planError(t *testing.T, f files, jobText string) string {
	t.Helper()
	folder := t.TempDir()
	f.write(t, folder)
	p, err := MakePlan(t.Context(), loadJob(t, folder, jobText), nil)
	if err == nil {
		err = p.Files[0].Err
	}
	if err == nil {
		return ""
	}
	return err.Error()
}

// Dates and times are no lengths.
func TestTimestampsAreNoLengths(t *testing.T) {
	byOrigin := tinyJob(`"raw/*.parquet"`, "true")
	for name, jobText := range map[string]string{
		"x": byOrigin, "z": byOrigin, "origin_y": byOrigin,
		"tide": strings.Replace(byOrigin, "level = 0", `column = "tide"`, 1),
	} {
		in := parquetfile.Column{Name: name, Values: []int64{1, 2}}
		f := files{"raw/a.parquet": asTimestamps(t, roles(t, "x,y,z,origin_x,origin_y,origin_z,tide", in), name)}
		if got, want := planError(t, f, jobText), `column "`+name+`" is INT64 TIMESTAMP_MICROS, want a `; !strings.Contains(got, want) {
			t.Errorf("the error is %q, want %s", got, want)
		}
	}
	f := files{
		"raw/a.parquet":  roles(t, "x,y,z,gps_time", parquetfile.Column{}),
		"flight.parquet": asTimestamps(t, roles(t, "gps_time,x,y,z", parquetfile.Column{Name: "z", Values: []int64{1, 2}}), "z"),
	}
	if got, want := planError(t, f, byOrigin+"trajectory = \"flight.parquet\"\n"), `flight.parquet: column "z" is INT64 TIMESTAMP_MICROS, want a length`; !strings.Contains(got, want) {
		t.Errorf("the error is %q, want %s", got, want)
	}
}
