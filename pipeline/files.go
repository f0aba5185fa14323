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

	"bentray/io/csvfile"
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
// has a receipt, and what a pattern reaches in the output folder below it, for a
// killed run may leave an output there without its receipt.
func findInputs(j *job.Job) (inputs []input, leftOut int, err error) {
	folder := j.Resolve(j.Output.Folder)
	seen := map[string]bool{}
	for _, pattern := range j.Input.Files {
		fixed, rest := doublestar.SplitPattern(filepath.ToSlash(pattern))
		start := j.Resolve(fixed)
		reached := !within(folder, start) // the output folder may be below the pattern
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
			if isOutput(path) || reached && within(folder, path) {
				leftOut++
				continue
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

// isOutput tells a file that an earlier run wrote, by the receipt beside it.
func isOutput(path string) bool {
	_, err := os.Stat(strings.TrimSuffix(path, rejectsSuffix) + receipt.Suffix)
	return err == nil
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

// checkOutputs refuses two inputs with one output, and an output that is an
// input, one of the job's other files or the job file, and a file for a folder.
// Inputs are ordered by their targets.
func checkOutputs(j *job.Job, inputs []input) error {
	if info, err := os.Stat(j.Resolve(j.Output.Folder)); err == nil && !info.IsDir() {
		return callErrorf("%s: [output] folder %q is a file, want a folder", j.Path, j.Output.Folder)
	}
	for i := 1; i < len(inputs); i++ {
		a, b := inputs[i-1], inputs[i]
		if a.target == b.target {
			return callErrorf("%s: %s and %s would both be written to %s; give them different names, or run them as two jobs", j.Path, a.name, b.name, a.output)
		}
	}
	byPath := map[string]bool{}
	for _, in := range inputs {
		byPath[in.path] = true
	}
	for _, in := range inputs {
		if byPath[in.output] || sameFile(in.path, in.output) {
			return callErrorf("%s: the output %s would overwrite an input; set [output] folder to another folder", j.Path, in.output)
		}
		for _, other := range []string{j.Path, j.Resolve(j.Rays.Trajectory), j.Resolve(j.Extent.Polygons)} {
			if sameFile(other, in.output) {
				return callErrorf("%s: the output %s would overwrite %s; set [output] folder to another folder", j.Path, in.output, other)
			}
		}
	}
	return nil
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

// checkFormat refuses a name that no format reads.
func checkFormat(path string) error {
	if csvfile.IsName(path) {
		return nil
	}
	return fmt.Errorf("%s: unknown kind of file %q, want .csv .tsv .txt .xyz or .asc (also with .gz or .zst)", path, filepath.Ext(path))
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
