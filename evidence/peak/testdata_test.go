package peak

import (
	"encoding/csv"
	"encoding/json"
	"os"
	"path/filepath"
	"strconv"
	"testing"

	"assaywrit/evidence/trace"
)

const testdata = "../../testdata/peaks"

// table returns a CSV file as numbers by column name, and the first column as text.
func table(t *testing.T, name string) (map[string][]float64, []string) {
	t.Helper()
	f, err := os.Open(filepath.Join(testdata, name))
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	rows, err := csv.NewReader(f).ReadAll()
	if err != nil || len(rows) < 2 {
		t.Fatalf("%s: %d rows, %v", name, len(rows), err)
	}
	cols := map[string][]float64{}
	var first []string
	for _, r := range rows[1:] {
		first = append(first, r[0])
		for j, head := range rows[0] {
			v, err := strconv.ParseFloat(r[j], 64)
			if err != nil && head != rows[0][0] {
				t.Fatalf("%s: %v", name, err)
			}
			cols[head] = append(cols[head], v)
		}
	}
	return cols, first
}

func readTrace(t *testing.T, name string) trace.Chromatogram {
	t.Helper()
	cols, _ := table(t, name+".csv")
	times := cols["time_min"]
	if times == nil {
		times = cols["time_s"] // left in seconds, as the true areas are
	}
	return trace.Chromatogram{ID: name, TimeMin: times, Intensity: cols["signal"]}
}

func readJSON(t *testing.T, name string, v any) {
	t.Helper()
	b, err := os.ReadFile(filepath.Join(testdata, name))
	if err != nil {
		t.Fatal(err)
	}
	if err := json.Unmarshal(b, v); err != nil {
		t.Fatalf("%s: %v", name, err)
	}
}
