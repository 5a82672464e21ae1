package store

import (
	"fmt"
	"math"
	"os"
	"path/filepath"
)

// fits refuses to bring a file to a new layout where the disk has no room for it, before
// anything is written. Where the system doesn't say how much there is, it is tried: a
// disk that fills up on the way leaves the file as it was, too.
func (s schema) fits(path string) error {
	need, err := roomFor(path)
	if err != nil {
		return err
	}
	free, known := s.room(filepath.Dir(path))
	if !known || free >= need {
		return nil
	}
	return &OpenError{Kind: ErrNoRoom, Path: path, Words: fmt.Sprintf(
		"has an older layout, and bringing it up to date needs about %s beside it, of which %s are free; make room and start again", megabytes(need), megabytes(free))}
}

// roomFor is what bringing a file to a new layout may take: a copy that is kept, a copy
// that is changed, and as much again for the log of the changes.
func roomFor(path string) (uint64, error) {
	sum := uint64(0)
	for _, suffix := range append(logsBeside(path), "") {
		info, err := os.Stat(path + suffix)
		if err != nil {
			return 0, err
		}
		sum += uint64(info.Size())
	}
	return 3 * sum, nil
}

// megabytes rounds up, so that a little is not none.
func megabytes(n uint64) string { return fmt.Sprintf("%.1f MB", math.Ceil(float64(n)/1e5)/10) }
