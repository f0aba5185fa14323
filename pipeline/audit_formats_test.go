package pipeline

import (
	"bytes"
	"compress/gzip"
	"context"
	"errors"
	"fmt"
	"path/filepath"
	"strings"
	"testing"
)

// Honest outputs hold in every dress that clouds come in.
func TestHonestDressesHold(t *testing.T) {
	plain := auditClouds(300, 9)
	gauge := auditKind{tables: auditWater + "[surface.gauge]\nfile = \"gauge.csv\"\n" + pulseRays}
	level := auditKind{tables: auditWater + auditLevel + pulseRays}
	zones := auditKind{tables: "[water]\nzones = \"zones.geojson\"\n" + auditLevel + pulseRays}
	var packed bytes.Buffer
	w := gzip.NewWriter(&packed)
	fmt.Fprint(w, plain)
	if err := w.Close(); err != nil {
		t.Fatal(err)
	}
	for _, c := range []struct {
		name, file, cloud string
		kind              auditKind
		rows              int64
	}{
		{"gzip", "a.csv.gz", packed.String(), level, 300},
		{"semicolons and CR LF", "a.csv", strings.NewReplacer("\"calm, clear\"", "\"calm\nclear\"", ";", " ", ",", ";", "\n", "\r\n").Replace(plain), level, 300},
		{"blanks", "a.xyz", strings.NewReplacer("\"calm, clear\"", "calm", "c1 c2 c3", "c1;c2", "c2 c5", "c2", ",,", " \"\" ", ",\n", " \"\"\n", ",", " ").Replace(plain), level, 300},
		{"comments", "a.csv", "# made up\n\n" + plain + "\n\n", level, 300},
		{"no row", "a.csv", plain[:strings.Index(plain, "\n")+1], level, 0},
		{"no row, Parquet", "a.parquet", parquetOf(t, "x,y,z,origin_x,origin_y,origin_z\n", 0, nil), level, 0},
		{"small groups", "a.parquet", parquetOf(t, plain, 70, nil), level, 300},
		{"whole numbers", "a.parquet", parquetOf(t, plain, 0, map[string]string{"x": "INT32", "y": "INT64", "z": "INT32"}), level, 300},
		{"FLOAT", "a.parquet", asFloats(t, parquetOf(t, plain, 0, map[string]string{"x": "INT32", "y": "INT32"}), "x", "y"), level, 300},
		{"timestamps", "a.parquet", asTimestamps(t, parquetOf(t, inMicroseconds(t, plain), 0, map[string]string{"gps_time": "INT64"}), "gps_time"), gauge, 300},
		{"an odd zone", "a.csv", plain, zones, 300},
		{"an odd zone, Parquet", "a.parquet", parquetOf(t, plain, 0, nil), zones, 300},
	} {
		t.Run(c.name, func(t *testing.T) {
			folder := t.TempDir()
			f := auditFiles()
			f["zones.geojson"] = strings.Replace(f["zones.geojson"], "Mill Bight", ` \"Mill\", Bight `, 1)
			f["raw/"+c.file] = c.cloud
			f.write(t, folder)
			_, ending, _ := strings.Cut(c.file, ".")
			runJob(t, loadJob(t, folder, c.kind.job(ending)), Options{})
			output := filepath.Join(folder, "true", c.file)
			made := readReceipt(t, output)
			if c.rows > 0 && made.Outcomes["corrected"] < 50 {
				t.Errorf("outcomes are %v, which shows little", made.Outcomes)
			}
			if r := audit(t, output); !r.Holds() || r.Files[0].Rows != c.rows || len(r.Files[0].Notes) > 0 {
				t.Errorf("the report is %+v", r.Files)
			}
		})
	}
}

// inMicroseconds has gps_time in whole microseconds.
func inMicroseconds(t *testing.T, text string) string {
	t.Helper()
	tb := readTable(t, text)
	var b strings.Builder
	b.WriteString(strings.Join(tb.names, ",") + "\n")
	for i := range tb.rows {
		for k, name := range tb.names {
			if field := tb.rows[i][k]; name == "gps_time" {
				tb.rows[i][k] = fmt.Sprintf("%.0f", 1e6*tb.number(t, i, name))
			} else if strings.Contains(field, ",") {
				tb.rows[i][k] = ""
			}
		}
		b.WriteString(strings.Join(tb.rows[i], ",") + "\n")
	}
	return b.String()
}

// An audit ends where its context does.
func TestAuditEnds(t *testing.T) {
	folder := auditKinds[0].run(t, "csv")
	ctx, cancel := context.WithCancel(t.Context())
	cancel()
	if r, err := Audit(ctx, filepath.Join(folder, "true"), AuditOptions{}); !errors.Is(err, context.Canceled) || r != nil {
		t.Errorf("cancelled, it gives %v, %v", r, err)
	}
}
