package pipeline

import (
	"cmp"
	"crypto/sha256"
	"encoding/json"
	"errors"
	"fmt"
	"io/fs"
	"os"
	"path/filepath"
	"slices"
	"strings"

	"bentray/pipeline/receipt"
)

// auditOutput is an output that can be audited.
type auditOutput struct {
	path  string
	bytes int64
	root  string // the output folder, as the receipt's path of the output tells it
	index int    // among FileAudits
}

// auditFind is what there is to audit below a path.
type auditFind struct {
	audits  []FileAudit     // of all outputs, those without a receipt that can be read with that fault
	groups  [][]auditOutput // the others, by run
	leftOut int             // clouds that are no outputs
}

// findOutputs finds an output, or all outputs in a folder and below.
func findOutputs(path string) (*auditFind, error) {
	info, err := os.Stat(path)
	f := &auditFind{}
	switch {
	case err != nil:
		return nil, &CallError{inFile(path, err)}
	case info.IsDir():
		return f, f.inFolder(path)
	case strings.HasSuffix(path, receipt.Suffix):
		return nil, callErrorf("%s: is a receipt, want the output beside it", path)
	case !IsCloud(path) || strings.HasSuffix(path, rejectsSuffix):
		return nil, callErrorf("%s: is no cloud, want an output of bentray or a folder of them", path)
	case !isOwn(path):
		return nil, callErrorf("%s: is no output of bentray: it has no receipt (%s%s) and no columns outcome and run", path, filepath.Base(path), receipt.Suffix)
	}
	f.add([]string{path}, filepath.Dir(path))
	return f, nil
}

// inFolder finds the outputs, with those whose receipt or that alone is left. The folder
// may be a symbolic link.
func (f *auditFind) inFolder(folder string) error {
	folder, err := filepath.EvalSymlinks(folder)
	if err != nil {
		return err
	}
	var paths []string
	err = filepath.WalkDir(folder, func(path string, d fs.DirEntry, err error) error {
		output, isReceipt := strings.CutSuffix(path, receipt.Suffix)
		switch {
		case err != nil:
			return err
		case d.IsDir():
		case isReceipt && !exists(output):
			paths = append(paths, output)
		case !IsCloud(path) || strings.HasSuffix(path, rejectsSuffix):
		case isOwn(path):
			paths = append(paths, path)
		default:
			f.leftOut++
		}
		return nil
	})
	if err == nil && len(paths) == 0 {
		err = callErrorf("%s: holds no output of bentray, which is a cloud with its receipt (NAME%s) beside it", folder, receipt.Suffix)
	}
	f.add(paths, folder)
	return err
}

// add reads the receipts of the outputs and sorts them by run.
func (f *auditFind) add(paths []string, folder string) {
	slices.SortFunc(paths, func(a, b string) int { return cmp.Compare(filepath.ToSlash(a), filepath.ToSlash(b)) })
	place := map[[sha256.Size]byte]int{}
	for i, path := range paths {
		f.audits = append(f.audits, FileAudit{Name: filepath.ToSlash(relative(folder, path))})
		r, err := receipt.Read(path)
		switch info, gone := os.Stat(path); {
		case gone != nil:
			f.audits[i].fault("the receipt is there, the output is not: %v", errors.Unwrap(gone))
		case errors.Is(err, fs.ErrNotExist):
			f.audits[i].fault("the receipt %s%s is not there; run the job again", filepath.Base(path), receipt.Suffix)
		case err != nil:
			f.audits[i].fault("the receipt cannot be read: %v", err)
		default:
			o := auditOutput{path: path, bytes: info.Size(), root: rootOf(path, r), index: i}
			key := runKey(r, o.root)
			k, known := place[key]
			if !known {
				k, place[key] = len(f.groups), len(f.groups)
				f.groups = append(f.groups, nil)
			}
			f.groups[k] = append(f.groups[k], o)
		}
	}
}

// rootOf is the output folder of the run that wrote an output.
func rootOf(path string, r *receipt.Receipt) string {
	folder := filepath.Dir(path)
	if !isNamed(path, r) {
		return folder
	}
	for range strings.Count(r.Output.Path, "/") {
		folder = filepath.Join(folder, "..")
	}
	return folder
}

// isNamed tells whether the receipt's path of an output ends like the output's.
func isNamed(path string, r *receipt.Receipt) bool {
	whole, err := filepath.Abs(path)
	name := filepath.FromSlash(r.Output.Path)
	return err == nil && filepath.IsLocal(name) && filepath.Clean(name) == name && strings.HasSuffix(whole, string(filepath.Separator)+name)
}

// runKey is the same for outputs that the same files and settings were made with.
func runKey(r *receipt.Receipt, root string) [sha256.Size]byte {
	key, _ := json.Marshal([]any{root, r.Run, r.Program, r.Job, r.Auxiliary()}) // what was read as JSON
	return sha256.Sum256(key)
}

// outputsOf lists the outputs below a folder that have a run's receipt, as the clouds of
// that run.
func outputsOf(root, run string) (clouds []input) {
	if real, err := filepath.EvalSymlinks(root); err == nil {
		root = real
	}
	_ = filepath.WalkDir(root, func(path string, _ fs.DirEntry, err error) error {
		output, isReceipt := strings.CutSuffix(path, receipt.Suffix)
		if err != nil || !isReceipt {
			return nil // what cannot be read is missing, and found so by the sum
		}
		if r, err := receipt.Read(output); err == nil && r.Run == run {
			name := filepath.ToSlash(relative(root, output))
			in := input{path: output, name: name, target: name}
			if info, err := os.Stat(output); err == nil {
				in.bytes = info.Size()
			}
			clouds = append(clouds, in)
		}
		return nil
	})
	slices.SortFunc(clouds, func(a, b input) int { return cmp.Compare(a.target, b.target) })
	return clouds
}

// fault notes what does not hold.
func (f *FileAudit) fault(format string, args ...any) {
	f.Faults = append(f.Faults, fmt.Sprintf(format, args...))
}
