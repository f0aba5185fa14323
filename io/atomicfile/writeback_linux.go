package atomicfile

import (
	"os"

	"golang.org/x/sys/unix"
)

// startWriteback asks the system to begin writing a part of the file to disk, so
// that Sync has little left to wait for. It is a hint: errors show in Sync.
func startWriteback(f *os.File, from, bytes int64) {
	_ = unix.SyncFileRange(int(f.Fd()), from, bytes, unix.SYNC_FILE_RANGE_WRITE)
}
