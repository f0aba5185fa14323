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
	j.checkSensors(f)
	j.Limits.check(f)
}

func (o *Output) check(f *faults) {
	f.requireText("output.folder", o.Folder, "a folder")
	f.oneOf("output.provenance", o.Provenance, Full, Lean)
	if o.Decimals < 0 || o.Decimals > 9 {
		f.add("output.decimals", "is %d, want 0 to 9", o.Decimals)
	}
}

func (e *Extent) check(f *faults) {
	if f.has("extent") {
		f.requireText("extent.polygons", e.Polygons, "a GeoJSON file")
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

// requireText reports a text that is missing or empty.
func (f *faults) requireText(key, text, wanted string) {
	f.require(key, wanted)
	f.notBlank(key, text, wanted)
}

// above0 reports a number in the file that is not above 0.
func (f *faults) above0(key string, v float64, unit string) {
	if f.has(key) && !(v > 0) {
		f.add(key, "is %s, want above 0%s", format(v), unit)
	}
}

// meant tells whether the file has a key or table, or a fault that stands for it
// or, of a table, for a key in it.
func (f *faults) meant(key string) bool {
	for told := range f.told {
		if strings.HasPrefix(told, key+".") {
			return true
		}
	}
	return f.has(key) || f.isTold(key)
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
