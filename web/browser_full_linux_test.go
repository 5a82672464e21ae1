package web

import (
	"os/signal"
	"syscall"
	"testing"
)

// A limit on the size of files stands for a full disk: no file of this process
// grows while it holds.
func fillDisk(t *testing.T) (free func()) {
	t.Helper()
	signal.Ignore(syscall.SIGXFSZ)
	var old syscall.Rlimit
	if err := syscall.Getrlimit(syscall.RLIMIT_FSIZE, &old); err != nil {
		t.Fatal(err)
	}
	if err := syscall.Setrlimit(syscall.RLIMIT_FSIZE, &syscall.Rlimit{Cur: 1, Max: old.Max}); err != nil {
		t.Fatal(err)
	}
	freed := false
	free = func() {
		if freed {
			return
		}
		freed = true
		if err := syscall.Setrlimit(syscall.RLIMIT_FSIZE, &old); err != nil {
			t.Error(err)
		}
		signal.Reset(syscall.SIGXFSZ)
	}
	t.Cleanup(free)
	return free
}

func TestFullDiskIsSaidAndTheDraftStays(t *testing.T) {
	h := serve(t)
	b := h.visit(frostSheet)
	b.expect("status of 507")
	before := h.kept("switch.rds_on")
	free := fillDisk(t)
	b.replace("switch.rds_on", "12m")
	b.says("#trouble", "The disk is full")
	want(b, `document.activeElement.id + ' ' + document.activeElement.value`, "f-switch.rds_on 12m")
	want(b, `document.querySelectorAll('#trouble .errors').length + ' ' + document.querySelectorAll('header.page').length`, "1 1")
	if got := h.kept("switch.rds_on"); got != before {
		t.Errorf("a full disk kept %q", got)
	}
	free()
	b.types("5")
	h.awaitKept("switch.rds_on", "12m5")
	b.wait(`!document.querySelector('#trouble').textContent.trim()`)
}
