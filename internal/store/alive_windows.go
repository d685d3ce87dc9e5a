package store

import (
	"errors"

	"golang.org/x/sys/windows"
)

// alive reports whether a process of that number runs on this machine.
func alive(pid int) bool {
	h, err := windows.OpenProcess(windows.SYNCHRONIZE, false, uint32(pid))
	if err != nil {
		return errors.Is(err, windows.ERROR_ACCESS_DENIED)
	}
	event, err := windows.WaitForSingleObject(h, 0)
	if closeErr := windows.CloseHandle(h); closeErr != nil {
		return true // unknown: the age of the claim decides
	}
	return err != nil || event == uint32(windows.WAIT_TIMEOUT)
}
