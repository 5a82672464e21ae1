//go:build linux || darwin || freebsd

package store

import "golang.org/x/sys/unix"

// freeRoom is what the file system of a folder has left for this user, in bytes. One
// that counts no blocks at all doesn't know.
func freeRoom(folder string) (free uint64, known bool) {
	var s unix.Statfs_t
	if err := unix.Statfs(folder, &s); err != nil || s.Blocks == 0 {
		return 0, false
	}
	return uint64(max(s.Bavail, 0)) * uint64(s.Bsize), true
}
