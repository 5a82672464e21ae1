package store

import "golang.org/x/sys/windows"

// freeRoom is what the volume of a folder has left for this user, in bytes.
func freeRoom(folder string) (free uint64, known bool) {
	path, err := windows.UTF16PtrFromString(folder)
	if err != nil {
		return 0, false
	}
	err = windows.GetDiskFreeSpaceEx(path, &free, nil, nil)
	return free, err == nil
}
