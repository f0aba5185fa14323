//go:build !linux

package atomicfile

import (
	"errors"
	"os"
)

func nameless(string) (*os.File, error) { return nil, errors.ErrUnsupported }
