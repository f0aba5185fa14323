package quality

import (
	"math"

	"bentray/correct"
	"bentray/io/cloud"
)

// figures gathers what a report shows of one file, and in the end of all. Its memory
// is bounded, and files joined in one order give the same figures to the bit.
type figures struct {
	outcomes, outcomesRaw map[string]int64
	all                   sums
	depth                 *bins // shifts by depth
	dz, dh                *bins // counts only
	incidence             []sums
	raster                *raster
	sample                *sample
	check                 *matcher // that all files share; nil where there are no check points
	overlap               *overlap // nil where it is not asked for

	noLevel  bool  // an output has no column of the water level
	noDepth  int64 // corrected points without a depth
	unpaired int64 // rows corrected in one of two corrected clouds alone
}

// incidenceWidth is the width of bands of incidence, degrees.
const incidenceWidth = 5

func newFigures(check *matcher, overlap *overlap) *figures {
	return &figures{
		outcomes: map[string]int64{}, outcomesRaw: map[string]int64{},
		depth: newBins(-2), dz: newBins(-4), dh: newBins(-4), incidence: make([]sums, 180/incidenceWidth+1),
		raster: newRaster(), sample: &sample{}, check: check, overlap: overlap,
	}
}

// gatherer takes the rows of one file into figures.
type gatherer struct {
	*figures
	read      *reading
	from      *reading // of the other file where that is a corrected cloud too, else nil
	columns   []cloud.Column
	f         *findings
	file      uint64 // number of the file
	row       int64  // rows before the next, of the corrected file
	tolerance float64

	known, knownRaw *names
	counts          []int64 // by known outcome
	countsRaw       []int64
	number          []byte
}

var correctedName, dryName = []byte(correct.Corrected.String()), []byte(correct.Dry.String())

// together takes rows that belong together; a is used of two corrected clouds only.
func (g *gatherer) together(a *cloud.Chunk, atA int, b *cloud.Chunk, at, rows int) {
	for i := range rows {
		corrected := g.count(b, at+i)
		if g.from == nil {
			if corrected {
				g.take(b, at+i, b.Numbers[g.read.raw[0]][at+i], b.Numbers[g.read.raw[1]][at+i], b.Numbers[g.read.raw[2]][at+i])
			}
			continue
		}
		before := g.countRaw(a, atA+i)
		switch {
		case corrected && before:
			n, x := a.Numbers, g.from.xyz
			g.take(b, at+i, n[x[0]][atA+i], n[x[1]][atA+i], n[x[2]][atA+i])
		case corrected != before:
			g.unpaired++
		}
	}
}

// alone takes rows of the corrected file that belong to none of the other.
func (g *gatherer) alone(b *cloud.Chunk, at, rows int) {
	for i := range rows {
		g.count(b, at+i)
	}
}

// count counts a row's outcome, and checks what the row says of itself.
func (g *gatherer) count(b *cloud.Chunk, i int) (corrected bool) {
	outcome := b.Texts[g.read.outcome].At(i)
	g.counts = counted(g.counts, g.known.of(outcome))
	corrected = string(outcome) == string(correctedName)
	g.row++
	if k, want := g.read.checkAgreement(b, i, corrected, g.tolerance); k >= 0 {
		g.f.moved(g.row, g.columns[g.read.request.Numbers[k]].Name, b.Numbers[k][i], want, corrected)
	}
	g.offer(b, i, corrected)
	return corrected
}

func (g *gatherer) countRaw(a *cloud.Chunk, i int) bool {
	outcome := a.Texts[g.from.outcome].At(i)
	g.countsRaw = counted(g.countsRaw, g.knownRaw.of(outcome))
	return string(outcome) == string(correctedName)
}

func counted(counts []int64, k int) []int64 {
	for len(counts) <= k {
		counts = append(counts, 0)
	}
	counts[k]++
	return counts
}

// take adds a corrected point that was at x, y, z.
func (g *gatherer) take(b *cloud.Chunk, i int, x, y, z float64) {
	p := sampled{
		x: b.Numbers[g.read.xyz[0]][i], y: b.Numbers[g.read.xyz[1]][i], z: b.Numbers[g.read.xyz[2]][i],
		rawX: x, rawY: y, rawZ: z, level: g.read.levelOf(b, i), hash: mix(g.file<<40 ^ uint64(g.row)),
	}
	dz, dh, depth := p.z-z, math.Hypot(p.x-x, p.y-y), b.Numbers[g.read.depth][i]
	if math.IsNaN(dz + dh) {
		return
	}
	g.all.add(dz, dh, depth)
	if s := g.depth.at(depth); s != nil {
		s.add(dz, dh, depth)
	} else {
		g.noDepth++
	}
	g.addShift(dz, dh)
	if incidence := g.incidenceOf(b, i); incidence >= 0 && incidence <= 180 {
		g.incidence[int(incidence/incidenceWidth)].add(dz, dh, depth)
	}
	g.raster.add(p.x, p.y, dz, dh)
	if g.sample.takes(p.hash) {
		g.sample.add(p)
	}
}

// incidenceOf returns a row's incidence in degrees, NaN where it is not known.
func (g *gatherer) incidenceOf(b *cloud.Chunk, i int) float64 {
	if g.read.incidence < 0 {
		return math.NaN()
	}
	return b.Numbers[g.read.incidence][i]
}

// offer takes a point to the check points and to the other flight lines, whatever the
// other file has of it.
func (g *gatherer) offer(b *cloud.Chunk, i int, corrected bool) {
	n, xyz := b.Numbers, &g.read.xyz
	x, y, z := n[xyz[0]][i], n[xyz[1]][i], n[xyz[2]][i]
	if g.overlap != nil && corrected {
		g.number = g.read.lineOf(b, i, g.number)
		g.overlap.add(g.number, x, y, z, n[g.read.depth][i], g.incidenceOf(b, i))
	}
	switch {
	case g.check == nil:
	case corrected:
		g.check.offer(x, y, z, g.read.levelOf(b, i))
	case string(b.Texts[g.read.outcome].At(i)) == string(dryName):
		g.check.dry(x, y)
	}
}

func (g *gatherer) addShift(dz, dh float64) {
	if s := g.dz.at(dz); s != nil {
		s.count++
	}
	if s := g.dh.at(dh); s != nil {
		s.count++
	}
}

// finish turns the counts into outcomes.
func (g *gatherer) finish() {
	for k, n := range g.counts {
		g.outcomes[g.known.list[k]] += n
	}
	for k, n := range g.countsRaw {
		g.outcomesRaw[g.knownRaw.list[k]] += n
	}
}

// join adds the figures of the next file.
func (f *figures) join(o *figures) {
	for name, n := range o.outcomes {
		f.outcomes[name] += n
	}
	for name, n := range o.outcomesRaw {
		f.outcomesRaw[name] += n
	}
	f.all.join(&o.all)
	f.depth.join(o.depth)
	f.dz.join(o.dz)
	f.dh.join(o.dh)
	for i := range f.incidence {
		f.incidence[i].join(&o.incidence[i])
	}
	f.raster.join(o.raster)
	f.sample.join(o.sample)
	if f.overlap != nil {
		f.overlap.join(o.overlap)
	}
	f.noLevel = f.noLevel || o.noLevel
	f.noDepth += o.noDepth
	f.unpaired += o.unpaired
}
