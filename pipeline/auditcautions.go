package pipeline

import (
	"fmt"
	"slices"

	"bentray/io/parquetfile"
	"bentray/pipeline/receipt"
)

// checkCautions compares the receipt's cautions with those that a run gives of such
// points. What the form of a raw Parquet file gave cause to say cannot be known here.
func (c *recheck) checkCautions(f *FileAudit, r *receipt.Receipt) {
	if r.Program != Program {
		f.Notes = append(f.Notes, fmt.Sprintf("cautions are not proven: the receipt's program is %q, which may word them otherwise than %s", r.Program, Program))
		return
	}
	want := slices.Concat(c.tally.cautions(c.survey), c.cautionsOf(c.file, c.read), rowCautions(r))
	for _, caution := range want {
		if !slices.Contains(r.Cautions, caution) {
			f.fault("the receipt lacks the caution %q", caution)
		}
	}
	for _, caution := range r.Cautions {
		if !slices.Contains(want, caution) && !c.isOfForm(caution) {
			f.fault("the receipt has the caution %q, for which there is no cause", caution)
		}
	}
}

// isOfForm tells whether a caution may be of the raw file's form.
func (c *recheck) isOfForm(caution string) bool {
	if c.isText {
		return false
	}
	for _, column := range c.file.Columns() {
		if slices.Contains(parquetfile.FormCautions(column.Name), caution) {
			return true
		}
	}
	return false
}
