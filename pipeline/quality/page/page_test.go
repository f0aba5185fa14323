package page

import (
	"encoding/json"
	"os"
	"path/filepath"
	"regexp"
	"strings"
	"testing"

	"bentray/pipeline/quality"
)

var sectionID = regexp.MustCompile(`<section id="(\w+)"`)

func sections(page string) (ids []string) {
	for _, m := range sectionID.FindAllStringSubmatch(page, -1) {
		ids = append(ids, m[1])
	}
	return ids
}

// A section is there where there is something to show, and the pictures with it.
func TestSectionsAndPictures(t *testing.T) {
	uncorrected := plainReport()
	uncorrected.Shift, uncorrected.Outcomes = quality.Shift{}, map[string]int64{"dry": 1000}
	unmatched := checked(plainReport(), 1) // the one is unmatched
	for _, c := range []struct {
		name     string
		report   *quality.Report
		sections string
		pictures int
	}{
		{"nothing but raw and corrected", plainReport(), "made outcomes shift cautions settings signing", 2},
		{"with places and angles", shown(plainReport()), "made outcomes shift map incidence cautions settings signing", 6},
		{"with check points", checked(plainReport(), 60), "made outcomes shift check cautions settings signing", 3},
		{"with check points that match nothing", unmatched, "made outcomes shift check cautions settings signing", 2},
		{"with flight lines", overlapping(plainReport()), "made outcomes shift overlap cautions settings signing", 3},
		{"with all", full(), "made outcomes shift map incidence check overlap cautions settings signing", 8},
		{"without a corrected point", uncorrected, "made outcomes cautions settings signing", 0},
		{"that does not hold", broken(), "findings made outcomes shift cautions settings signing", 2},
	} {
		t.Run(c.name, func(t *testing.T) {
			page := render(t, c.report)
			if got := strings.Join(sections(page), " "); got != c.sections {
				t.Errorf("sections are %q, want %q", got, c.sections)
			}
			if got := strings.Count(page, "<svg "); got != c.pictures {
				t.Errorf("there are %d pictures, want %d", got, c.pictures)
			}
		})
	}
}

// What a reader must find, in the words and figures of the page.
func TestSays(t *testing.T) {
	two := plainReport()
	two.TwoCorrected, two.OutcomesRaw = true, map[string]int64{"corrected": 790, "grazing": 210}
	feet := plainReport()
	feet.Unit, feet.VerticalUnit = "us-ft", "ft"
	for _, c := range []struct {
		name   string
		report *quality.Report
		want   []string
		not    []string
	}{
		{"all", full(), []string{
			"Complete and unchanged", "17.5 °C, salinity 34.9", "phase index 1.342000", "one level, 0.42 m", "airborne laser pulses (pulse), origins from flight.csv, light of 532 nm",
			"depths of 0.10 to 11.90 m", "80.0\u00a0%", "&#43;1.8000&nbsp;m", "0.0600&nbsp;m", "59 of 60 surveyed points of check.csv", "± 0.1500", "97.0\u00a0%",
			"sensor.1.rays.trajectory", "33cc", "11aa", "22bb", "for mapping work, not for navigation", "date, signature",
		}, []string{"Does not hold", "not measured"}},
		{"no check", plainReport(), []string{"not measured", "not how true it is"}, []string{"S-44"}},
		{"broken", broken(), []string{"Does not hold", "Columns changed: intensity", "tile.csv: row 7: intensity is &#34;8&#34;, want &#34;7&#34;", "<td>dropped</td>"}, []string{"Complete and unchanged"}},
		{"two corrections", two, []string{"Two corrections of one point cloud", "the second minus the first", "grazing", `<td class="n">790</td>`}, []string{"From raw to true"}},
		{"two units", feet, []string{"lengths in us-ft, heights in ft", "plan in us-ft"}, nil},
	} {
		page := render(t, c.report)
		for _, want := range c.want {
			if !strings.Contains(page, want) {
				t.Errorf("%s: the page has no %q", c.name, want)
			}
		}
		for _, not := range c.not {
			if strings.Contains(page, not) {
				t.Errorf("%s: the page has %q", c.name, not)
			}
		}
	}
}

// Texts from files stay texts, wherever they stand.
func TestEscapes(t *testing.T) {
	const evil = `</style></svg><script>alert("1")</script><img src=x onerror='alert(2)'>`
	quoted, _ := json.Marshal(evil)
	r := full()
	r.Raw, r.Corrected, r.Holds = evil, evil, false
	r.Findings, r.ColumnsChanged = []quality.Finding{{File: evil, Text: evil}}, []string{evil}
	r.FindingCounts = map[string]int64{evil: 1}
	r.Outcomes[evil] = 3
	r.Unit, r.VerticalUnit = evil, evil // of no receipt that bentray wrote, but of one that another did
	r.Files = append(r.Files, quality.FileReport{Name: evil, Error: evil, InputSHA256: evil, OutputSHA256: evil})
	r.Settings[0].Run, r.Settings[0].Program, r.Settings[0].Auxiliary[0].Path = evil, evil, evil
	r.Settings[0].Job = json.RawMessage(strings.NewReplacer(`"flight.csv"`, string(quoted), `"quan-fry"`, string(quoted)).Replace(settings))
	r.Check.File, r.Check.Warnings, r.Overlap.Column = evil, []string{evil}, evil
	r.Overlap.Pairs[0].A, r.Overlap.Warnings = evil, []string{evil}
	r.Cautions, r.Notes, r.NotCompared, r.OneSided = []string{evil}, []string{evil}, []string{evil}, []string{evil}
	page := render(t, r)
	for _, tag := range []string{"<script", "<img", "</style></svg>"} {
		if strings.Contains(page, tag) {
			t.Errorf("the page has %s", tag)
		}
	}
	if n := strings.Count(page, "&lt;script&gt;"); n < 25 {
		t.Errorf("the names are shown %d times, want 25 at least", n)
	}
	if strings.Count(page, "<style>") != 1 || strings.Count(page, "</html>") != 1 {
		t.Error("the page is not one document with one style")
	}
}

// Nothing in the page names a place to load from, and nothing is a script; what a
// browser makes of it is seen by make page-test.
func TestStandsAlone(t *testing.T) {
	page := render(t, full())
	for _, forbidden := range []string{"http:", "https:", "<script", "url(", "@import", "<iframe", "<object", "javascript:"} {
		if strings.Contains(page, forbidden) {
			t.Errorf("the page has %q", forbidden)
		}
	}
	for _, m := range regexp.MustCompile(`(?:href|src)="([^"]{0,40})`).FindAllStringSubmatch(page, -1) {
		if !strings.HasPrefix(m[1], "data:,") && !strings.HasPrefix(m[1], "data:image/png;base64,iVBOR") {
			t.Errorf("the page loads %q", m[1])
		}
	}
	if !strings.Contains(page, `http-equiv="Content-Security-Policy" content="default-src 'none'; style-src 'unsafe-inline'; img-src data:"`) {
		t.Error("the page may load what it likes")
	}
}

// Equal reports give equal bytes, also where maps are in play.
func TestSameBytes(t *testing.T) {
	first := render(t, full())
	for range 5 {
		if again := render(t, full()); again != first {
			t.Fatal("two pages of equal reports differ")
		}
	}
}

func TestSizeIsBounded(t *testing.T) {
	if size := len(render(t, full())); size > 400_000 {
		t.Errorf("the page has %d bytes, want 400 000 at most", size)
	}
	page := render(t, huge())
	if len(page) > 700_000 {
		t.Errorf("the largest page has %d bytes, want 700 000 at most", len(page))
	}
	for _, want := range []string{"And 9\u202f901 more files", "And 9\u202f996 more settings"} {
		if !strings.Contains(page, want) {
			t.Errorf("the page has no %q", want)
		}
	}
}

func TestWriteIsWhole(t *testing.T) {
	folder := t.TempDir()
	path := filepath.Join(folder, "report.html")
	if err := Write(path, full()); err != nil {
		t.Fatal(err)
	}
	data, err := os.ReadFile(path)
	if err != nil || string(data) != render(t, full()) {
		t.Errorf("the file holds another page (%v)", err)
	}
	entries, _ := os.ReadDir(folder)
	if len(entries) != 1 {
		t.Errorf("the folder holds %v, want the page alone", entries)
	}
	if err := Write(filepath.Join(folder, "gone", "report.html"), full()); err == nil {
		t.Error("a page in a folder that is not there is no error")
	}
}
