package pipeline

import (
	"context"
	"errors"
	"os"
	"path/filepath"
	"slices"
	"strings"
	"testing"
)

// tiny is the smallest cloud that the job tinyJob can correct: one point
// 10 m under a level of 0, seen straight down from 400 m.
const tiny = "x,y,z,origin_x,origin_y,origin_z\n5,6,-10,5,6,400\n"

const tinyRest = media + "[surface]\nlevel = 0\n[rays]\nmodel = \"pulse\"\n"

// tinyJob is a job over files that hold tiny.
func tinyJob(patterns, folder string) string {
	return "[input]\nfiles = [" + patterns + "]\n[output]\nfolder = \"" + folder + "\"\n" + tinyRest
}

func TestParseShard(t *testing.T) {
	for _, c := range []struct {
		text string
		want Shard
	}{
		{"0/1", Shard{0, 1}},
		{"2/3", Shard{2, 3}},
		{"9/1000000", Shard{9, 1000000}},
	} {
		if got, err := ParseShard(c.text); err != nil || got != c.want || got.String() != c.text {
			t.Errorf("%q is %v, %v, want %v", c.text, got, err, c.want)
		}
	}
	for _, text := range []string{"", "1", "/", "1/", "/3", "3/3", "-1/3", "0/0", "1/3 ", " 1/3", "1/3/4", "1 / 3", "a/3", "1.5/3"} {
		_, err := ParseShard(text)
		var call *CallError
		if !errors.As(err, &call) || !strings.Contains(err.Error(), "want I/N with I from 0 to N-1") {
			t.Errorf("%q gives %v, want a CallError", text, err)
		}
	}
}

func targetsOf(inputs []input) (names []string) {
	for _, in := range inputs {
		names = append(names, in.target)
	}
	return names
}

func TestPick(t *testing.T) {
	var all []input
	for _, name := range []string{"a.csv", "b.csv", "north/a.csv", "north/deep/c.csv"} {
		all = append(all, input{target: name})
	}
	for _, c := range []struct {
		only string
		want []string
	}{
		{"", []string{"a.csv", "b.csv", "north/a.csv", "north/deep/c.csv"}},
		{"a.csv", []string{"a.csv"}},
		{"**/a.csv", []string{"a.csv", "north/a.csv"}},
		{"north/*", []string{"north/a.csv"}},
		{"{b,north/deep/c}.csv", []string{"b.csv", "north/deep/c.csv"}},
	} {
		got, err := pick(all, Shard{}, c.only)
		if err != nil || !slices.Equal(targetsOf(got), c.want) {
			t.Errorf("%q picks %q, %v, want %q", c.only, targetsOf(got), err, c.want)
		}
	}
	for only, want := range map[string]string{
		"c.csv": `--only "c.csv" names none of the job's 4 files (names are as below the output folder, such as a.csv)`,
		"[a":    `--only "[a" is not a pattern; * ? [abc] {a,b} and ** are understood`,
	} {
		if _, err := pick(all, Shard{}, only); err == nil || err.Error() != want {
			t.Errorf("%q gives %v, want %s", only, err, want)
		}
	}
}

func TestShardsTakeEachFileOnce(t *testing.T) {
	var all []input
	for i := range 100 {
		all = append(all, input{target: "tile_" + string(rune('a'+i%26)) + strings.Repeat("x", i/26) + ".csv"})
	}
	for _, count := range []int{1, 2, 3, 7, 1 << 32} {
		var picked []string
		for index := range min(count, 7) {
			part, err := pick(all, Shard{index, count}, "")
			if err != nil {
				t.Fatal(err)
			}
			picked = append(picked, targetsOf(part)...)
		}
		slices.Sort(picked)
		if count <= 7 && !slices.Equal(picked, slices.Sorted(slices.Values(targetsOf(all)))) {
			t.Errorf("%d shards take %d files, want each of %d once", count, len(picked), len(all))
		}
	}
}

func TestFindInputs(t *testing.T) {
	for _, c := range []struct {
		name, patterns, folder string
		files                  []string
		want                   []string // input -> output
		leftOut                int
	}{
		{"flat", `"raw/*.csv"`, "true", []string{"raw/b.csv", "raw/a.csv", "raw/a.txt"}, []string{"raw/a.csv -> a.csv", "raw/b.csv -> b.csv"}, 0},
		{"sub-folders, ** also none", `"raw/**/*.csv"`, "true", []string{"raw/a.csv", "raw/n/b.csv", "raw/n/m/c.csv"}, []string{"raw/a.csv -> a.csv", "raw/n/b.csv -> n/b.csv", "raw/n/m/c.csv -> n/m/c.csv"}, 0},
		{"one file by two patterns", `"raw/**/*.csv", "raw/n/*.csv"`, "true", []string{"raw/n/b.csv"}, []string{"raw/n/b.csv -> n/b.csv"}, 0},
		{"a plain name", `"raw/n/b.csv"`, "true", []string{"raw/n/b.csv"}, []string{"raw/n/b.csv -> b.csv"}, 0},
		{"braces", `"raw/{a,c}.csv"`, "true", []string{"raw/a.csv", "raw/b.csv", "raw/c.csv"}, []string{"raw/a.csv -> a.csv", "raw/c.csv -> c.csv"}, 0},
		{"outputs of another job, by their receipt", `"**/*.csv"`, "true", []string{"raw/a.csv", "old/a.csv", "old/a.csv.receipt.json", "old/a.csv.rejects.csv"}, []string{"raw/a.csv -> raw/a.csv"}, 2},
		{"an output that a killed run left without receipt", `"**/*.csv"`, "true", []string{"raw/a.csv", "true/raw/a.csv"}, []string{"raw/a.csv -> raw/a.csv"}, 1},
		{"rejects that a killed run left without receipt", `"**/*.csv"`, "true", []string{"raw/a.csv", "true/raw/a.csv.rejects.csv"}, []string{"raw/a.csv -> raw/a.csv"}, 1},
		{"a raw cloud in the output folder", `"out/raw/*.csv"`, "out", []string{"out/raw/a.csv"}, []string{"out/raw/a.csv -> a.csv"}, 0},
		{"a folder with the name of a cloud is no cloud", `"raw/**/*.csv"`, "true", []string{"raw/a.csv", "raw/b.csv/part.csv"}, []string{"raw/a.csv -> a.csv", "raw/b.csv/part.csv -> b.csv/part.csv"}, 0},
	} {
		t.Run(c.name, func(t *testing.T) {
			folder := t.TempDir()
			f := files{}
			for _, name := range c.files {
				f[name] = tiny
				if strings.HasPrefix(name, "true/") {
					f[name] = "x,y,z,outcome,run\n"
				}
			}
			f.write(t, folder)
			inputs, leftOut, err := findInputs(loadJob(t, folder, tinyJob(c.patterns, c.folder)))
			if err != nil {
				t.Fatal(err)
			}
			var got []string
			for _, in := range inputs {
				got = append(got, in.name+" -> "+in.target)
			}
			if !slices.Equal(got, c.want) || leftOut != c.leftOut {
				t.Errorf("found %q, left out %d, want %q and %d", got, leftOut, c.want, c.leftOut)
			}
		})
	}
}

// Receipts name inputs as seen from the job file, however the job was called.
func TestNamesDoNotDependOnTheWorkingFolder(t *testing.T) {
	folder := t.TempDir()
	files{"survey/raw/a.csv": tiny, "elsewhere/b.csv": tiny}.write(t, folder)
	t.Chdir(folder)
	loadJob(t, "survey", tinyJob(`"raw/*.csv", "`+filepath.ToSlash(folder)+`/elsewhere/*.csv"`, "true"))
	for _, path := range []string{"survey", filepath.Join(folder, "survey")} {
		text := readFile(t, path, "job.toml")
		inputs, _, err := findInputs(loadJob(t, path, text))
		if err != nil {
			t.Fatal(err)
		}
		if got := []string{inputs[0].name, inputs[1].name}; !slices.Equal(got, []string{"raw/a.csv", "../elsewhere/b.csv"}) {
			t.Errorf("with the job in %s the inputs are named %q", path, got)
		}
	}
}

// Nothing is ever written over what a job reads.
func TestOutputOverInput(t *testing.T) {
	polygon := `{"type":"Polygon","coordinates":[[[0,0],[9,0],[9,9],[0,9],[0,0]]]}`
	for _, c := range []struct{ name, job, want string }{
		{"the cloud itself", tinyJob(`"raw/*.csv"`, "raw"), "the output raw/a.csv would overwrite an input"},
		{"the cloud itself through a link", tinyJob(`"raw/*.csv"`, "linked"), "the output linked/a.csv would overwrite an input"},
		{"two clouds to one name", tinyJob(`"raw/*.csv", "a.csv"`, "."), "a.csv would both be written to a.csv"},
		{"another cloud", tinyJob(`"flights/*.csv", "sub/flight.csv"`, "sub"), "both be written to sub/flight.csv"},
		{"another cloud that goes elsewhere", tinyJob(`"flights/*.csv", "{sub,none}/flight.csv"`, "."), "the output sub/flight.csv would overwrite an input"},
		{"the rejects of another", tinyJob(`"pair/*"`, "true"), "pair/a.csv.rejects.csv is named as rows that could not be read are"},
		{"a cloud named as rejects", tinyJob(`"odd/*"`, "true"), "odd/t.rejects.csv is named as rows that could not be read are (NAME.rejects.csv); give it another name"},
		{"what is not bentray's", tinyJob(`"raw/*.csv"`, "notes"), "notes/a.csv is there already and no output of bentray"},
		{"the trajectory", tinyJob(`"flights/*.csv"`, ".") + "trajectory = \"flight.csv\"\n", "the output flight.csv would overwrite flight.csv"},
		{"the polygons", tinyJob(`"flights/*.csv"`, "sub") + "[extent]\npolygons = \"sub/flight.csv\"\n", "the output sub/flight.csv would overwrite sub/flight.csv"},
	} {
		t.Run(c.name, func(t *testing.T) {
			folder := t.TempDir()
			files{"raw/a.csv": tiny, "a.csv": tiny, "flight.csv": "gps_time,x,y,z\n", "flights/flight.csv": tiny, "sub/flight.csv": polygon, "notes/a.csv": "day,remark\n1,calm\n", "pair/a.csv": tiny, "pair/a.csv.rejects.csv": tiny, "odd/t.rejects.csv": tiny}.write(t, folder)
			if err := os.Symlink("raw", filepath.Join(folder, "linked")); err != nil {
				t.Fatal(err)
			}
			t.Chdir(folder)
			j := loadJob(t, ".", c.job)
			before := snapshot(t, folder)
			_, err := Run(context.Background(), j, Options{})
			var call *CallError
			if !errors.As(err, &call) || !strings.Contains(err.Error(), c.want) {
				t.Errorf("got %v, want a CallError with %q", err, c.want)
			}
			same(t, "the folder", snapshot(t, folder), before)
		})
	}
}
