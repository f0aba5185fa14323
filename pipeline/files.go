package pipeline

import (
	"cmp"
	"errors"
	"fmt"
	"hash/fnv"
	"io/fs"
	"os"
	"path/filepath"
	"slices"
	"strconv"
	"strings"

	"github.com/bmatcuk/doublestar/v4"

	"bentray/pipeline/job"
	"bentray/pipeline/receipt"
)

// rejectsSuffix is what the name of a file of rejected rows adds to its output's.
const rejectsSuffix = ".rejects.csv"

// input is one file of a job and where its output goes.
type input struct {
	path   string // as opened
	name   string // relative to the job file, with slashes
	output string // as written
	target string // relative to the output folder, with slashes
	bytes  int64
}

// findInputs returns the files that the job's patterns name, ordered by their
// outputs. A file keeps the sub-folders below the fixed part of the first
// pattern that names it. Outputs of earlier runs are left out and counted: what
// has a receipt, and in the output folder what a killed run left without one.
func findInputs(j *job.Job) (inputs []input, leftOut int, err error) {
	folder := j.Resolve(j.Output.Folder)
	seen := map[string]bool{}
	for _, pattern := range j.Input.Files {
		fixed, rest := doublestar.SplitPattern(filepath.ToSlash(pattern))
		start := j.Resolve(fixed)
		matches, err := match(start, rest)
		if err != nil {
			return nil, 0, callErrorf("%s: [input] files: %q %w", j.Path, pattern, err)
		}
		for _, target := range matches {
			path := filepath.Join(start, target)
			if seen[path] {
				continue
			}
			seen[path] = true
			if hasReceipt(path) || within(folder, path) && (isOwn(path) || strings.HasSuffix(path, rejectsSuffix)) {
				leftOut++
				continue
			}
			if strings.HasSuffix(path, rejectsSuffix) {
				return nil, 0, callErrorf("%s: [input] files: %s is named as rows that could not be read are (NAME%s); give it another name, or leave it out of files", j.Path, path, rejectsSuffix)
			}
			inputs = append(inputs, newInput(j, path, filepath.Join(folder, target), target))
		}
	}
	if len(inputs) == 0 {
		return nil, 0, callErrorf("%s: [input] files names only outputs of earlier runs, want raw clouds", j.Path)
	}
	slices.SortFunc(inputs, func(a, b input) int { return cmp.Compare(a.target, b.target) })
	return inputs, leftOut, checkOutputs(j, inputs)
}

// match returns the files below the folder that a pattern names, as names
// relative to the folder.
func match(folder, pattern string) ([]string, error) {
	matches, err := doublestar.Glob(os.DirFS(folder), pattern, doublestar.WithFilesOnly(), doublestar.WithFailOnIOErrors())
	switch {
	case errors.Is(err, doublestar.ErrBadPattern):
		return nil, errors.New("is not a pattern; * ? [abc] {a,b} and ** are understood")
	case err != nil:
		return nil, err
	case len(matches) == 0 && strings.ContainsAny(pattern, "*?[{"):
		return nil, errors.New("matches no file")
	case len(matches) == 0 && exists(filepath.Join(folder, pattern)):
		return nil, errors.New("is a folder, want a file, or a pattern of files in it")
	case len(matches) == 0:
		return nil, errors.New("is not there")
	}
	return matches, nil
}

// newInput describes a file, which may turn out not to be readable.
func newInput(j *job.Job, path, output, target string) input {
	in := input{path: path, name: filepath.ToSlash(relative(j.Dir, path)), output: output, target: target}
	if info, err := os.Stat(path); err == nil {
		in.bytes = info.Size()
	}
	return in
}

// relative returns the path as seen from the folder, or unchanged where there
// is no way. Either may be relative to the working folder.
func relative(folder, path string) string {
	from, fromErr := filepath.Abs(folder)
	to, toErr := filepath.Abs(path)
	name, err := filepath.Rel(from, to)
	if errors.Join(fromErr, toErr, err) != nil {
		return path
	}
	return name
}

// within tells whether a path is the folder or below it.
func within(folder, path string) bool { return filepath.IsLocal(relative(folder, path)) }

// checkOutputs refuses a file in the place of the output folder, two inputs that
// would write one file, and an output in the place of an input, of another file
// of the job, or of anything that bentray did not write.
func checkOutputs(j *job.Job, inputs []input) error {
	if info, err := os.Stat(j.Resolve(j.Output.Folder)); err == nil && !info.IsDir() {
		return callErrorf("%s: [output] folder %q is a file, want a folder", j.Path, j.Output.Folder)
	}
	raw, writer := map[string]bool{}, map[string]string{}
	for _, in := range inputs {
		raw[in.path] = true
		for _, path := range in.writes() {
			if other, taken := writer[path]; taken {
				return callErrorf("%s: %s and %s would both be written to %s; give them different names, or run them as two jobs", j.Path, other, in.name, path)
			}
			writer[path] = in.name
		}
	}
	for _, in := range inputs {
		if err := checkOverInput(j, in, raw); err != nil {
			return err
		}
	}
	for _, in := range inputs {
		if exists(in.output) && !isOwn(in.output) {
			return callErrorf("%s: %s is there already and no output of bentray; move it, or %s", j.Path, in.output, otherFolder)
		}
	}
	return nil
}

const otherFolder = "set [output] folder to another folder"

func checkOverInput(j *job.Job, in input, raw map[string]bool) error {
	if raw[in.output] || sameFile(in.path, in.output) {
		return callErrorf("%s: the output %s would overwrite an input; %s", j.Path, in.output, otherFolder)
	}
	for _, other := range otherFiles(j) {
		if sameFile(other, in.output) {
			return callErrorf("%s: the output %s would overwrite %s; %s", j.Path, in.output, other, otherFolder)
		}
	}
	return nil
}

// otherFiles lists the files that a job reads beside its clouds, itself among them.
func otherFiles(j *job.Job) []string {
	names := []string{j.Extent.Polygons, j.Water.Zones, j.Water.Stations}
	for _, sn := range j.Sensors {
		names = append(names, sn.Rays.Trajectory)
	}
	if p := j.Surface.Plane; p != nil {
		names = append(names, p.Waterline)
	}
	if p := j.Surface.Profile; p != nil {
		names = append(names, p.Centreline, p.Levels)
	}
	if g := j.Surface.Grid; g != nil {
		names = append(names, g.Points)
	}
	if g := j.Surface.Gauge; g != nil {
		names = append(names, g.File)
	}
	if p := j.Surface.Separation; p != nil {
		names = append(names, p.File)
	}
	paths := []string{j.Path}
	for _, name := range names {
		if name != "" {
			paths = append(paths, j.Resolve(name))
		}
	}
	return paths
}

// writes lists the files that an input may lead to.
func (in *input) writes() []string {
	return []string{in.output, in.output + receipt.Suffix, in.output + rejectsSuffix}
}

func sameFile(a, b string) bool {
	infoA, errA := os.Stat(a)
	infoB, errB := os.Stat(b)
	return errA == nil && errB == nil && os.SameFile(infoA, infoB)
}

// Shard is one of several processes that share a job: it does the files whose
// name hashes to Index. The zero Shard does all.
type Shard struct {
	Index, Count int // 0 <= Index < Count
}

// ParseShard reads "I/N", I from 0.
func ParseShard(s string) (Shard, error) {
	i, n, _ := strings.Cut(s, "/")
	index, indexErr := strconv.Atoi(i)
	count, countErr := strconv.Atoi(n)
	if indexErr != nil || countErr != nil || index < 0 || index >= count {
		return Shard{}, callErrorf("--shard is %q, want I/N with I from 0 to N-1, such as 0/4", s)
	}
	return Shard{index, count}, nil
}

func (s Shard) String() string {
	if s.Count == 0 {
		return ""
	}
	return fmt.Sprintf("%d/%d", s.Index, s.Count)
}

// fileName is the shard as a part of a file name.
func (s Shard) fileName() string { return fmt.Sprintf("%d-of-%d", s.Index, s.Count) }

func (s Shard) has(target string) bool {
	if s.Count == 0 {
		return true
	}
	h := fnv.New32a()
	h.Write([]byte(target))
	return uint64(h.Sum32())%uint64(s.Count) == uint64(s.Index)
}

// pick keeps the inputs that a shard and a pattern (empty: all) name.
func pick(inputs []input, shard Shard, only string) ([]input, error) {
	if only != "" && !doublestar.ValidatePattern(only) {
		return nil, callErrorf("--only %q is not a pattern; * ? [abc] {a,b} and ** are understood", only)
	}
	picked := slices.DeleteFunc(slices.Clone(inputs), func(in input) bool {
		return !shard.has(in.target) || only != "" && !doublestar.MatchUnvalidated(only, in.target)
	})
	if len(picked) == 0 && only != "" {
		return nil, callErrorf("--only %q names none of the job's %d files (names are as below the output folder, such as %s)", only, len(inputs), inputs[0].target)
	}
	return picked, nil
}

// makeFolders makes the output folder and that of each output.
func makeFolders(root string, inputs []input) error {
	made := map[string]bool{}
	folders := []string{root}
	for _, in := range inputs {
		folders = append(folders, filepath.Dir(in.output))
	}
	for _, folder := range folders {
		if made[folder] {
			continue
		}
		if err := os.MkdirAll(folder, 0o777); err != nil {
			var p *fs.PathError
			if errors.As(err, &p) {
				err = p.Err
			}
			return callErrorf("%s: cannot make the output folder: %w", folder, err)
		}
		made[folder] = true
	}
	return nil
}

// CheckPicture refuses to write a picture over a file of the job, or in a file that
// is named as something else. Its errors are *CallErrors.
func CheckPicture(j *job.Job, path string) error {
	if !strings.EqualFold(filepath.Ext(path), ".png") {
		return callErrorf("picture is %q, want a name that ends in .png", path)
	}
	inputs := otherFiles(j)
	if clouds, _, err := findInputs(j); err == nil { // a surface can be looked at before the clouds are there
		for _, in := range clouds {
			inputs = append(inputs, in.path)
		}
	}
	for _, input := range inputs {
		if filepath.Clean(path) == filepath.Clean(input) || sameFile(path, input) {
			return callErrorf("the picture %s would overwrite %s, which the job reads; give another name", path, input)
		}
	}
	return nil
}
