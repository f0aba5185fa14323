package quality

import "maps"

const histogramBins = 40

// report fills in the figures.
func (f *figures) report(r *Report) {
	r.Outcomes, r.Shift = maps.Clone(f.outcomes), f.all.shift()
	if r.TwoCorrected {
		r.OutcomesRaw = maps.Clone(f.outcomesRaw)
	}
	if list := f.byDepth(); list != nil {
		r.ByDepth = list
	}
	for i := range f.incidence {
		if s := &f.incidence[i]; s.count > 0 {
			from := float64(i * incidenceWidth)
			r.ByIncidence = append(r.ByIncidence, IncidenceBand{Number(from), Number(from + incidenceWidth), s.shift(), Number(s.depth / float64(s.count))})
		}
	}
	r.Histograms = Histograms{DZ: f.dz.histogram(histogramBins), DH: f.dh.histogram(histogramBins), Depth: f.depth.histogram(histogramBins)}
	r.Map, r.Sections = f.raster.report(), f.sample.sections()
}

func (f *figures) byDepth() []DepthBand {
	if len(f.depth.list) == 0 {
		return nil
	}
	w := chooseWidth(f.depth.low, f.depth.high, maxBands, f.depth.step)
	var list []DepthBand
	first := w.band(f.depth.low)
	for i, s := range f.depth.bands(w) {
		list = append(list, DepthBand{Number(w.from(first + i)), Number(w.to(first + i)), s.shift()})
	}
	return list
}
