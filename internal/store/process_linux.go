package store

import (
	"bytes"
	"fmt"
	"os"
	"strings"
)

// machineID tells apart what shares a host name: each start of the system, and containers, which
// count processes for themselves.
func machineID() string {
	boot, err := os.ReadFile("/proc/sys/kernel/random/boot_id")
	if err != nil {
		return ""
	}
	space, err := os.Readlink("/proc/self/ns/pid")
	if err != nil {
		return ""
	}
	return strings.TrimSpace(string(boot)) + " " + space
}

// processStart tells apart processes that had the same number: the time of their start in clock
// ticks, "" when unknown. It is the field 22 of the status line, counted behind the name of the
// program, which may hold anything in its parentheses.
func processStart(pid int) string {
	status, err := os.ReadFile(fmt.Sprintf("/proc/%d/stat", pid))
	if err != nil {
		return ""
	}
	const fieldsBehindName = 22 - 2
	fields := bytes.Fields(status[bytes.LastIndexByte(status, ')')+1:])
	if len(fields) < fieldsBehindName {
		return ""
	}
	return string(fields[fieldsBehindName-1])
}
