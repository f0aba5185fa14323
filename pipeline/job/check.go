package job

import (
	"slices"
	"strconv"
	"strings"
)

// check reports everything that is wrong with the decoded job.
func (j *Job) check(f *faults) {
	j.Input.check(f)
	j.Output.check(f)
	j.Select.check(f)
	j.checkMedia(f)
	j.Surface.check(f)
	j.Extent.check(f)
	j.Rays.check(f)
	j.Limits.check(f)
}

func (o *Output) check(f *faults) {
	f.require("output.folder", "a folder")
	f.notBlank("output.folder", o.Folder, "a folder")
	f.oneOf("output.provenance", o.Provenance, Full, Lean)
	if o.Decimals < 0 || o.Decimals > 9 {
		f.add("output.decimals", "is %d, want 0 to 9", o.Decimals)
	}
}

func (e *Extent) check(f *faults) {
	if f.has("extent") {
		f.require("extent.polygons", "a GeoJSON file")
		f.notBlank("extent.polygons", e.Polygons, "a GeoJSON file")
	}
}

var planeWants = map[string]string{
	"level":   "the elevation at the place named by at",
	"at":      "a place [x, y]",
	"slope_x": "the rise over run along x",
	"slope_y": "the rise over run along y",
}

func (s *Surface) check(f *faults) {
	f.notBlank("surface.column", s.Column, "a column's name")
	if f.has("surface.plane") {
		for _, key := range schema.keys("surface.plane") {
			f.require("surface.plane."+key, planeWants[key])
		}
	}
	given := slices.DeleteFunc([]string{"level", "column", "plane"}, func(key string) bool { return !f.has("surface." + key) })
	switch {
	case len(given) > 1:
		f.tooMany(given)
	case len(given) == 0 && !f.isTold("surface.level") && !f.isTold("surface.column") && !f.isTold("surface.plane"):
		f.add("surface", "has no water surface, want level, column or [surface.plane]")
	}
}

// tooMany reports water surfaces beside each other, at the last one's line.
func (f *faults) tooMany(given []string) {
	slices.SortStableFunc(given, func(a, b string) int { return f.line("surface."+a) - f.line("surface."+b) })
	where := each(given, func(key string) string {
		return key + " (line " + strconv.Itoa(f.line("surface."+key)) + ")"
	})
	f.addAt(f.line("surface."+given[len(given)-1]),
		"[surface] has "+strings.Join(where, " and ")+", want one of level, column and [surface.plane]")
}

func (r *Rays) check(f *faults) {
	f.require("rays.model", `"vertical" or "pulse"`)
	f.oneOf("rays.model", r.Model, Vertical, Pulse)
	if r.Model == Vertical {
		for _, key := range []string{"trajectory", "max_gap", "range_index"} {
			f.noEffect("rays."+key, `with model "vertical"`, `use model = "pulse"`)
		}
		return
	}
	f.notBlank("rays.trajectory", r.Trajectory, "a file")
	if !f.has("rays.trajectory") {
		f.noEffect("rays.max_gap", "without trajectory", "name the trajectory")
	}
	if f.has("rays.max_gap") && r.MaxGap <= 0 {
		f.add("rays.max_gap", "is %s, want above 0 seconds", format(r.MaxGap))
	}
	if n := r.RangeIndex; n != nil && (*n < 1 || *n > 1.01) {
		f.add("rays.range_index", "is %s, want 1 to 1.01, the index of air that the ranges were made with", format(*n))
	}
}

func (l *Limits) check(f *faults) {
	if l.MaxIncidence <= 0 || l.MaxIncidence >= 90 {
		f.add("limits.max_incidence", "is %s, want above 0 and below 90 degrees", format(l.MaxIncidence))
	}
}

// require reports a key that is not in the file.
func (f *faults) require(key, wanted string) {
	if !f.has(key) {
		f.add(key, "is missing, want %s", wanted)
	}
}

// noEffect reports a key that is in the file to no effect.
func (f *faults) noEffect(key, why, or string) {
	if f.has(key) {
		f.add(key, "has no effect %s; remove it, or %s", why, or)
	}
}

// notBlank reports a text that is in the file and empty.
func (f *faults) notBlank(key, text, wanted string) {
	if f.has(key) && isBlank(text) {
		f.add(key, "is empty, want %s", wanted)
	}
}

func isBlank(text string) bool { return strings.TrimSpace(text) == "" }

// oneOf reports a text in the file that is none of the words.
func (f *faults) oneOf(key, text string, words ...string) {
	if f.has(key) && !slices.Contains(words, text) {
		f.add(key, "is %q, want %s", text, anyOf(each(words, strconv.Quote)))
	}
}
