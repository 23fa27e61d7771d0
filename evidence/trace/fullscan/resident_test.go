package fullscan

import (
	"fmt"
	"os"
	"os/exec"
	"runtime"
	"strings"
	"testing"
)

// residentFile names the file of which a child process reads one ion trace; see BenchmarkResident.
const residentFile = "ASSAYWRIT_RESIDENT_FILE"

func TestMain(m *testing.M) {
	path := os.Getenv(residentFile)
	if path == "" {
		os.Exit(m.Run())
	}
	_, err := extract(path, runtime.GOMAXPROCS(0), false, Filter{})
	if err != nil {
		fmt.Fprintln(os.Stderr, err)
		os.Exit(1)
	}
	status, err := os.ReadFile("/proc/self/status")
	if err != nil {
		fmt.Fprintln(os.Stderr, err)
		os.Exit(1)
	}
	_, after, _ := strings.Cut(string(status), "VmHWM:")
	fmt.Print(strings.TrimSpace(strings.SplitN(after, "kB", 2)[0]))
	os.Exit(0)
}

// BenchmarkResident reads one ion trace of a file of 1 GB in a process of its own and reports the most memory that it had resident
// (target: 128 MiB). It needs Linux.
func BenchmarkResident(b *testing.B) {
	if runtime.GOOS != "linux" {
		b.Skip("the memory of a process is read from /proc, which only Linux has")
	}
	path := runFile(b, 1<<30)
	b.SetBytes(size(b, path))
	most := 0.0
	for b.Loop() {
		child := exec.Command(os.Args[0])
		child.Env = append(os.Environ(), residentFile+"="+path)
		child.Stderr = os.Stderr
		out, err := child.Output()
		if err != nil {
			b.Fatal(err)
		}
		var kib float64
		if _, err := fmt.Sscan(string(out), &kib); err != nil {
			b.Fatal(err)
		}
		most = max(most, kib/1024)
	}
	b.ReportMetric(most, "MiB-resident")
}
