package quality

import (
	"cmp"
	"fmt"
	"io/fs"
	"os"
	"path/filepath"
	"slices"
	"strings"

	"bentray/pipeline"
)

// rejectsSuffix is what the name of a file of diverted rows adds to its output's.
const rejectsSuffix = ".rejects.csv"

// filePair is a raw file and the corrected one of the same name below their folders.
type filePair struct {
	name           string // of the corrected file, with slashes
	raw, corrected string
	bytes          int64 // of both
}

// findPairs matches two files, or the clouds below two folders by their relative
// names. Files without a partner are findings.
func findPairs(raw, corrected string) (pairs []filePair, without []Finding, err error) {
	rawFolder, err := isFolder(raw)
	if err != nil {
		return nil, nil, err
	}
	correctedFolder, err := isFolder(corrected)
	switch {
	case err != nil:
		return nil, nil, err
	case rawFolder != correctedFolder:
		return nil, nil, callErrorf("%s and %s are a file and a folder, want two files or two folders", raw, corrected)
	case isSame(raw, corrected):
		return nil, nil, callErrorf("%s and %s are the same, want a raw cloud and its corrected one", raw, corrected)
	case !rawFolder:
		return []filePair{newPair(filepath.Base(corrected), raw, corrected)}, nil, nil
	}
	pairs, without, err = pairFolders(raw, corrected)
	if err == nil && len(pairs) == 0 {
		err = callErrorf("%s and %s have no cloud of the same relative name", raw, corrected)
	}
	return pairs, without, err
}

func isFolder(path string) (bool, error) {
	info, err := os.Stat(path)
	if err != nil {
		return false, callErrorf("%s: %w", path, plain(err))
	}
	return info.IsDir(), nil
}

func isSame(a, b string) bool {
	infoA, errA := os.Stat(a)
	infoB, errB := os.Stat(b)
	return errA == nil && errB == nil && os.SameFile(infoA, infoB)
}

func newPair(name, raw, corrected string) filePair {
	p := filePair{name: name, raw: raw, corrected: corrected}
	for _, path := range []string{raw, corrected} {
		if info, err := os.Stat(path); err == nil {
			p.bytes += info.Size()
		}
	}
	return p
}

func pairFolders(raw, corrected string) (pairs []filePair, without []Finding, err error) {
	raws, err := cloudsBelow(raw, corrected)
	if err != nil {
		return nil, nil, err
	}
	outputs, err := cloudsBelow(corrected, raw)
	if err != nil {
		return nil, nil, err
	}
	lone := func(name, text string) {
		without = append(without, Finding{File: name, Kind: KindFile, Text: text})
	}
	for name := range raws {
		if outputs[name] {
			pairs = append(pairs, newPair(name, filepath.Join(raw, name), filepath.Join(corrected, name)))
		} else {
			lone(name, fmt.Sprintf("is in %s alone, want a corrected cloud of that name in %s", raw, corrected))
		}
	}
	for name := range outputs {
		if !raws[name] {
			lone(name, fmt.Sprintf("is in %s alone, want a raw cloud of that name in %s", corrected, raw))
		}
	}
	slices.SortFunc(pairs, func(a, b filePair) int { return cmp.Compare(a.name, b.name) })
	slices.SortFunc(without, func(a, b Finding) int { return cmp.Compare(a.File, b.File) })
	return pairs, without, nil
}

// cloudsBelow lists the clouds below a folder, but for those below the other one. The
// folder may be a symbolic link.
func cloudsBelow(folder, other string) (map[string]bool, error) {
	folder, err := filepath.EvalSymlinks(folder)
	if err != nil {
		return nil, err
	}
	clouds := map[string]bool{}
	err = filepath.WalkDir(folder, func(path string, d fs.DirEntry, err error) error {
		switch {
		case err != nil:
			return err
		case d.IsDir() && path != folder && isSame(path, other):
			return fs.SkipDir
		case d.IsDir() || !pipeline.IsCloud(path) || strings.HasSuffix(path, rejectsSuffix):
			return nil
		}
		name, err := filepath.Rel(folder, path)
		clouds[filepath.ToSlash(name)] = true
		return err
	})
	return clouds, err
}
