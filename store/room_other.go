//go:build !(linux || darwin || freebsd || windows)

package store

// freeRoom is not asked for on this system.
func freeRoom(string) (free uint64, known bool) { return 0, false }
