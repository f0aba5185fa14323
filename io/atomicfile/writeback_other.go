//go:build !linux

package atomicfile

import "os"

// startWriteback does nothing: the system offers no such hint.
func startWriteback(*os.File, int64, int64) {}
