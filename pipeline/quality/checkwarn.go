package quality

import "fmt"

const (
	fewChecks  = 30   // fewer check points say little of a 95 % error
	bulk       = 0.05 // share of the cloud's points at either end of its depths that need no check point
	openDepths = 0.1  // share of the depths of the bulk that may be unchecked at either end
)

// warnings says where the check points fall short; depth is that of the cloud.
func (r *CheckReport) warnings(matched []CheckPoint, depth *bins) []string {
	list := []string{}
	say := func(format string, args ...any) { list = append(list, fmt.Sprintf(format, args...)) }
	if r.Count == 0 {
		say("no check point lies within %g of enough corrected points: are cloud and check points in one reference system? a larger --reach, or --match nearest, takes points farther off", float64(r.Reach))
	} else if r.Count < fewChecks {
		say("%d check points are matched, fewer than %d: the figures are uncertain themselves", r.Count, fewChecks)
	}
	if r.Count > 0 && r.Unmatched > 0 {
		say("%d of %d check points are unmatched: too few corrected points within reach, or all to one side", r.Unmatched, r.Given)
	}
	if r.Ignored > 0 {
		say("%d check points lack a finite coordinate or have one beyond 1e12, and are left out", r.Ignored)
	}
	if r.OnLand > 0 {
		say("%d check points lie on land: at or above the water, or with dry points alone within reach; they say nothing of the correction and are in no figure", r.OnLand)
	}
	if r.Count > len(matched) {
		say("%d matched check points have no water level and so no usable depth: they are left out of slope, bands and orders", r.Count-len(matched))
	}
	if isNoisy(float64(r.Scatter), matched) {
		say("the corrected points scatter by %.3f about the local planes, much beside the spread of the depths: the error at check points is that of noise in good part, and its slope against depth says little", float64(r.Scatter))
	}
	return append(list, spanWarning(matched, depth)...)
}

// spanWarning compares the depths of the check points with those of the cloud's bulk.
func spanWarning(matched []CheckPoint, depth *bins) []string {
	if len(matched) == 0 || len(depth.list) == 0 {
		return nil
	}
	low, high := depths(matched)
	from, to := depth.quantile(bulk), depth.quantile(1-bulk)
	open := openDepths * (to - from)
	if low <= from+open && high >= to-open {
		return nil
	}
	return []string{fmt.Sprintf("the check points span depths of %.2f to %.2f, the cloud mostly %.2f to %.2f: the rest is unchecked", low, high, from, to)}
}

// quantile returns the edge of the bin in which a share of the values is reached.
func (b *bins) quantile(share float64) float64 {
	var all, sum int64
	for i := range b.list {
		all += b.list[i].count
	}
	for i := range b.list {
		if sum += b.list[i].count; float64(sum) >= share*float64(all) {
			return b.edge(b.first + i)
		}
	}
	return b.high
}
