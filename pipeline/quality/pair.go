package quality

import (
	"context"
	"fmt"

	"golang.org/x/sync/errgroup"

	"bentray/io/cloud"
	"bentray/io/parquetfile"
	"bentray/pipeline/receipt"
)

// fileDiff is the comparison of two files, on the way to its result.
type fileDiff struct {
	pair     filePair
	number   uint64 // of the pair
	o        *shared
	report   FileReport
	findings *findings
	figures  *figures
	made     *provenance // nil without a receipt
	rejects  *rejects

	a, b     table
	from, to *output // from is nil where the first is a raw cloud
	pairs    []pairing
	proven   bool // all columns are stored in the same bytes: the first file need not be decoded
	oneSided []string
	opaque   []string
	read     int64 // bytes

	otherInput string // why the raw cloud is not the one that the receipt names
}

// diff compares the two files.
func (d *fileDiff) diff(ctx context.Context) error {
	if err := d.open(); err != nil {
		return err
	}
	defer d.a.Close()
	defer d.b.Close()
	p := pairer{a: d.a.Columns(), b: d.b.Columns(), from: d.from, to: d.to, f: d.findings}
	p.pair()
	d.pairs, d.oneSided = p.pairs, p.oneSided
	if err := d.prove(); err != nil {
		return err
	}
	g, err := d.begin()
	if err != nil {
		return err
	}
	both, within := errgroup.WithContext(ctx)
	both.Go(func() error { return d.checkInput(within) })
	both.Go(func() error { return d.run(within, g) })
	if err := both.Wait(); err != nil {
		return err
	}
	if d.otherInput != "" {
		d.findings.addf(KindReceipt, "%s", d.otherInput)
	}
	g.finish()
	d.made.check(&d.report, d.figures.outcomes, d.findings)
	return nil
}

// checkInput compares a raw cloud with what the receipt has of it.
func (d *fileDiff) checkInput(ctx context.Context) error {
	if d.made == nil || d.from != nil {
		return nil
	}
	bytes, sum, err := receipt.Hash(ctx, d.pair.raw)
	if err != nil {
		return err
	}
	d.otherInput = d.made.otherInput(bytes, sum)
	return nil
}

// prove leaves in pairs what must be compared by value: of Parquet, columns in other
// bytes. Coordinates stay unless all of them are the same, since rows are known by
// them.
func (d *fileDiff) prove() error {
	a, isParquet := d.a.(*parquetfile.File)
	if !isParquet {
		return nil
	}
	b := d.b.(*parquetfile.File)
	var left []pairing
	differs := false
	for _, p := range d.pairs {
		equal, err := a.EqualChunks(p.a, b, p.b)
		switch {
		case err != nil:
			return fmt.Errorf("%s and %s: column %q: %w", d.pair.raw, d.pair.corrected, p.name, err)
		case equal && !d.isCoordinate(p):
		case !a.CanStore(p.a) || !b.CanStore(p.b):
			d.opaque = append(d.opaque, p.name)
			d.findings.column(p.name, "", "", "is stored in other bytes, as %s, which cannot be read: its values cannot be compared", d.b.Columns()[p.b].Type)
		default:
			left = append(left, p)
			differs = differs || !equal
		}
	}
	if differs {
		d.pairs = left
		return nil
	}
	d.pairs, d.proven = nil, a.Rows() == b.Rows()
	return nil
}

// isCoordinate tells whether a pair is a raw coordinate.
func (d *fileDiff) isCoordinate(p pairing) bool { return p.b >= d.to.raw && p.b < d.to.raw+3 }

// begin lays out what is read of both files.
func (d *fileDiff) begin() (*gatherer, error) {
	read, err := newReading(d.b.Columns(), d.to, d.o.lines, d.made)
	if err != nil {
		return nil, inFile(d.pair.corrected, err)
	}
	g := &gatherer{figures: d.figures, read: read, columns: d.b.Columns(), f: d.findings, file: d.number, known: newNames(), knownRaw: newNames()}
	if g.tolerance, err = d.tolerance(); err != nil {
		return nil, err
	}
	d.figures.noLevel = read.level < 0
	if d.figures.overlap != nil {
		d.figures.overlap.column = read.lineName
	}
	var first cloud.Request
	if d.from != nil {
		if g.from, err = newReading(d.a.Columns(), d.from, false, nil); err != nil {
			return nil, inFile(d.pair.raw, err)
		}
		first = g.from.request
	}
	for _, p := range d.pairs {
		first.Stored, read.request.Stored = append(first.Stored, p.a), append(read.request.Stored, p.b)
	}
	if err := d.a.Begin(first, cloud.Layout{}, nil); err != nil {
		return nil, err
	}
	return g, d.b.Begin(read.request, cloud.Layout{}, nil)
}

// run goes through the rows.
func (d *fileDiff) run(ctx context.Context, g *gatherer) error {
	ctx, cancel := context.WithCancel(ctx)
	b := startSide(ctx, d.b, func(c *cloud.Chunk) { d.progress(c.Consumed) })
	sides := []*side{b}
	defer func() {
		cancel()
		for _, s := range sides {
			s.wait()
		}
	}()
	if d.proven && d.from == nil {
		d.report.RowsRaw, _ = rowsOf(d.a)
		d.rejects.end(d.findings)
		return d.alone(ctx, b, g)
	}
	rejected := int64(0)
	a := startSide(ctx, d.a, func(c *cloud.Chunk) {
		d.progress(c.Consumed)
		d.rejects.take(c.Rejects, d.findings)
		rejected += int64(len(c.Rejects))
	})
	sides = append(sides, a)
	coordinates := 0
	for coordinates < len(d.pairs) && d.isCoordinate(d.pairs[coordinates]) {
		coordinates++
	}
	c := comparison{a: a, b: b, pairs: d.pairs, coordinates: coordinates, f: d.findings, together: g.together, alone: g.alone}
	err := c.run(ctx)
	d.rejects.end(d.findings)
	d.report.RowsDiverted += rejected
	d.report.Rows, d.report.RowsRaw = b.done, a.done+rejected
	return err
}

// alone goes through the rows of the corrected file, each of which is proven to be the
// raw cloud's.
func (d *fileDiff) alone(ctx context.Context, b *side, g *gatherer) error {
	for {
		ok, err := b.ready()
		if !ok || err != nil {
			d.report.Rows = b.done
			return err
		}
		if err := ctx.Err(); err != nil {
			return err
		}
		g.together(nil, 0, b.queue[0], b.at, b.left())
		b.pass(b.left())
	}
}

// unproven counts the rows whose reason to be diverted was not looked at.
func (d *fileDiff) unproven() int64 {
	if d.rejects == nil {
		return 0
	}
	return d.rejects.unproven
}

func rowsOf(t table) (rows int64, known bool) {
	if f, ok := t.(*parquetfile.File); ok {
		return f.Rows(), true
	}
	return 0, false
}

func (d *fileDiff) progress(bytes int64) {
	d.read += bytes
	d.o.watch.Read(bytes)
}
