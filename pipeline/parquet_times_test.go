package pipeline

import (
	"bytes"
	"fmt"
	"strings"
	"testing"

	"bentray/io/parquetfile"
)

// utcAhead is what UTC seconds since 1970 are ahead of adjusted standard GPS
// seconds at the time of the flight: 1e9 s (LAS 1.4 R15, ASPRS 2019, global
// encoding), 315964800 s from 1970-01-01 to 1980-01-06, less 18 leap seconds
// since 2017 (IERS Bulletin C 52, 2016).
const utcAhead = 1e9 + 315_964_800 - 18

// stamps are a table's gps_time as a TIMESTAMP column.
func stamps(t *testing.T, text string) string {
	t.Helper()
	tb := readTable(t, text)
	micros := make([]int64, len(tb.rows))
	for i := range micros {
		micros[i] = int64((tb.number(t, i, "gps_time") + utcAhead) * 1e6)
	}
	var columns []parquetfile.Column
	for _, name := range tb.names {
		numbers, _ := numbersOf(tb.column(t, name))
		c := parquetfile.Column{Name: name, Values: numbers}
		if name == "gps_time" {
			c.Values = micros
		}
		columns = append(columns, c)
	}
	return asTimestamps(t, tableOf(t, 0, columns...), "gps_time")
}

// Times of clouds and trajectories may be numbers on the job's scale or
// TIMESTAMPs, each apart from the other. They are multiples of 1/64 s, which
// microseconds and float64 hold to the bit.
func TestTruthByTimestamps(t *testing.T) {
	c := truthCases[0]
	w := standardSea(t)
	shots := w.shootEvery(1.0/64, 400, false)
	numbers := func(text string) string { return parquetOf(t, text, 0, nil) }
	dated := func(text string) string { return stamps(t, text) }
	for _, flight := range []struct {
		name, file string
		encode     func(string) string
	}{
		{"CSV numbers", "flight.csv", func(text string) string { return text }},
		{"Parquet numbers", "flight.parquet", numbers},
		{"TIMESTAMP", "flight.parquet", dated},
	} {
		for name, cloud := range map[string]func(string) string{"numbers": numbers, "TIMESTAMP": dated} {
			t.Run(fmt.Sprintf("cloud of %s, trajectory of %s", name, flight.name), func(t *testing.T) {
				folder := t.TempDir()
				files{"raw/a.parquet": cloud(c.cloud(shots)), flight.file: flight.encode(c.flight())}.write(t, folder)
				jobText := strings.NewReplacer("*.csv", "*.parquet", "flight.csv", flight.file).Replace(c.job(w))
				runJob(t, loadJob(t, folder, jobText), Options{})
				c.compare(t, readParquet(t, readFile(t, folder, "true/a.parquet")), shots, 0)
			})
		}
	}
}

// A TIMESTAMP is UTC whatever the job's scale is for numbers.
func TestTimestampsOnEveryScale(t *testing.T) {
	const flight = "gps_time,x,y,z\n%s,0,0,400\n%s,10,0,400\n"
	for _, c := range []struct{ name, scale, from, to string }{
		{"gps-adjusted", `time = "gps-adjusted"`, "400000000", "400000001"},
		{"utc", `time = "utc"`, "1715964782", "1715964783"},
		// 1.4e9 s are 2314 weeks of 604800 s and 492800 s
		{"gps-week", "time = \"gps-week\"\nweek = 2314", "492800", "492801"},
	} {
		t.Run(c.name, func(t *testing.T) {
			folder := t.TempDir()
			files{
				"raw/a.parquet": stamps(t, "x,y,z,gps_time\n3,0,-1,400000000.25\n3,0,-1,400000000.75\n3,0,-1,399999999\n"),
				"flight.csv":    fmt.Sprintf(flight, c.from, c.to),
			}.write(t, folder)
			runJob(t, loadJob(t, folder, strings.Replace(tinyJob(`"raw/*.parquet"`, "true"), "[output]", c.scale+"\n[output]", 1)+"trajectory = \"flight.csv\"\n"), Options{})
			got := readParquet(t, readFile(t, folder, "true/a.parquet"))
			near(t, 0, "origin_x", got.number(t, 0, "origin_x"), 2.5, 1e-9)
			near(t, 1, "origin_x", got.number(t, 1, "origin_x"), 7.5, 1e-9)
			if outcome := got.text(t, 2, "outcome"); outcome != "no_origin" {
				t.Errorf("a second before the trajectory the point is %s, want no_origin", outcome)
			}
		})
	}
}

// A plan shows the same times for numbers and TIMESTAMPs.
func TestPlanOfTimestamps(t *testing.T) {
	const cloud = "x,y,z,gps_time\n3,0,-1,400000000\n3,0,-1,400000060\n"
	for name, data := range map[string]string{"numbers": parquetOf(t, cloud, 0, nil), "TIMESTAMP": stamps(t, cloud)} {
		p := planOf(t, files{"raw/a.parquet": data, "flight.csv": "gps_time,x,y,z\n400000000,0,0,400\n400000060,1,0,400\n"},
			tinyJob(`"raw/*.parquet"`, "true")+"trajectory = \"flight.csv\"\n")
		var b bytes.Buffer
		for _, at := range p.Heads.Times {
			fmt.Fprint(&b, at.Format("2006-01-02T15:04:05Z07:00 "))
		}
		// date -u -d @1715964782
		if want := "2024-05-17T16:53:02Z 2024-05-17T16:54:02Z "; b.String() != want {
			t.Errorf("%s: times are %s, want %s", name, &b, want)
		}
	}
}
