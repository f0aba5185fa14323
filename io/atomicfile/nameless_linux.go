package atomicfile

import (
	"os"

	"golang.org/x/sys/unix"
)

// nameless makes a file that has no name at any time. Not every file system can.
func nameless(folder string) (*os.File, error) {
	return os.OpenFile(folder, os.O_RDWR|unix.O_TMPFILE, 0o600)
}
