package quality

import (
	"encoding/json"
	"errors"
	"fmt"
	"io/fs"
	"maps"
	"slices"

	"bentray/geo"
	"bentray/pipeline/job"
	"bentray/pipeline/receipt"
)

// provenance is what the receipt beside a corrected file says.
type provenance struct {
	*receipt.Receipt
	job job.Job
}

// readProvenance reads the receipt; nil where there is none.
func readProvenance(corrected string) (*provenance, error) {
	r, err := receipt.Read(corrected)
	if errors.Is(err, fs.ErrNotExist) {
		return nil, nil
	}
	if err != nil {
		return nil, err
	}
	p := &provenance{Receipt: r}
	if err := json.Unmarshal(r.Job, &p.job); err != nil {
		return nil, fmt.Errorf("%s%s: job: %w", corrected, receipt.Suffix, err)
	}
	return p, nil
}

// check compares the receipt's counts with those found.
func (p *provenance) check(file *FileReport, outcomes map[string]int64, f *findings) {
	if p == nil {
		return
	}
	if p.RowsWritten != file.Rows {
		f.addf(KindReceipt, "the receipt has %d rows written, found %d", p.RowsWritten, file.Rows)
	}
	if p.RowsDiverted != file.RowsDiverted {
		f.addf(KindReceipt, "the receipt has %d rows diverted, found %d", p.RowsDiverted, file.RowsDiverted)
	}
	for _, name := range slices.Sorted(maps.Keys(outcomes)) {
		if outcomes[name] != p.Outcomes[name] {
			f.addf(KindReceipt, "the receipt has %d points %s, found %d", p.Outcomes[name], name, outcomes[name])
		}
	}
	for _, name := range slices.Sorted(maps.Keys(p.Outcomes)) {
		if _, found := outcomes[name]; !found {
			f.addf(KindReceipt, "the receipt has %d points %s, found 0", p.Outcomes[name], name)
		}
	}
}

// otherInput tells why a raw cloud is not the one that the receipt names; empty where it
// is.
func (p *provenance) otherInput(bytes int64, sum string) string {
	if len(p.Inputs) == 0 || p.Inputs[0].Use != "cloud" {
		return "the receipt does not name the raw cloud as its first input"
	}
	if in := p.Inputs[0]; in.Bytes != bytes || in.SHA256 != sum {
		return fmt.Sprintf("the receipt has the raw cloud with %d bytes and sha256 %.12s, found %d bytes with %.12s: it is another or was changed", in.Bytes, in.SHA256, bytes, sum)
	}
	return p.OtherName()
}

// units are those of the lengths of all files.
type units struct {
	plan, height   string
	known          bool
	metres, metreZ float64 // in one unit of plan and of height
}

// readUnits takes the units from the first receipt, and wants the others to agree.
func readUnits(pairs []filePair) (units, error) {
	u := units{plan: job.Metre, height: job.Metre}
	for _, pair := range pairs {
		p, err := readProvenance(pair.corrected)
		if p == nil || err != nil {
			continue // told where the file is compared
		}
		in := p.job.Input
		if u.known && (in.Unit != u.plan || in.VerticalUnit != u.height) {
			return u, callErrorf("%s has lengths in %s and heights in %s, others in %s and %s; compare them apart", pair.corrected, in.Unit, in.VerticalUnit, u.plan, u.height)
		}
		u.plan, u.height, u.known = in.Unit, in.VerticalUnit, true
	}
	plan, err := geo.ParseUnit(u.plan)
	if err != nil {
		return u, fmt.Errorf("receipt: %w", err)
	}
	height, err := geo.ParseUnit(u.height)
	if err != nil {
		return u, fmt.Errorf("receipt: %w", err)
	}
	u.metres, u.metreZ = float64(plan), float64(height)
	return u, nil
}
