package pipeline

import (
	"path/filepath"
	"runtime"
	"runtime/metrics"
	"testing"
	"time"
)

// BenchmarkAudit audits one output of 1.5 million pulses in each format, through one
// water and through local water. MiB is the most heap that was in use beyond that of
// the benchmark's own preparation.
func BenchmarkAudit(b *testing.B) {
	const n = 1_500_000
	folder := benchFolder(b, n)
	for _, format := range formats {
		for _, c := range benchJobs {
			b.Run(format+"/"+c.name, func(b *testing.B) {
				runJob(b, loadJob(b, folder, benchJob(format)+c.tables), Options{Redo: true})
				output := filepath.Join(folder, "true", "a."+format)
				b.ReportAllocs()
				most := watchHeap()
				for b.Loop() {
					r, err := Audit(b.Context(), output, AuditOptions{})
					if err != nil || !r.Holds() || r.Files[0].Rows != n {
						b.Fatalf("%+v, %v", r, err)
					}
				}
				b.ReportMetric(most(), "MiB")
				b.ReportMetric(float64(n)*float64(b.N)/b.Elapsed().Seconds(), "points/s")
			})
		}
	}
}

// watchHeap looks at the heap every few milliseconds until the function that it returns
// is called, which tells the most of it (MiB) beyond what is in use now.
func watchHeap() (most func() float64) {
	runtime.GC()
	before, peak, stop := heapMiB(), make(chan float64), make(chan struct{})
	go func() {
		high := before
		for {
			select {
			case <-stop:
				peak <- high
				return
			case <-time.After(5 * time.Millisecond):
				high = max(high, heapMiB())
			}
		}
	}()
	return func() float64 {
		close(stop)
		return <-peak - before
	}
}

// heapMiB is the heap's objects, dead ones that are not yet collected among them.
func heapMiB() float64 {
	sample := []metrics.Sample{{Name: "/memory/classes/heap/objects:bytes"}}
	metrics.Read(sample)
	return float64(sample[0].Value.Uint64()) / (1 << 20)
}
