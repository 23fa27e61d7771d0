package canonical_test

import (
	"testing"

	"github.com/google/go-cmp/cmp"

	"assaywrit/evidence/canonical"
)

func TestDifferences(t *testing.T) {
	tests := []struct {
		name, left, right string
		relative          float64
		want              []canonical.Difference
	}{
		{"equal", `{"a":1,"b":[1,2]}`, `{"b":[1,2],"a":1}`, 0, nil},
		{"a number", `{"a":{"b/c":1}}`, `{"a":{"b/c":2}}`, 0, []canonical.Difference{{"/a/b~1c", "1", "2"}}},
		{"last digit, exactly", `{"a":1.0000000001}`, `{"a":1.0000000002}`, 0, []canonical.Difference{{"/a", "1.0000000001", "1.0000000002"}}},
		{"last digit, within 1e-9", `{"a":1.0000000001}`, `{"a":1.0000000002}`, 1e-9, nil},
		{"just over 1e-9", `{"a":1}`, `{"a":1.000000002}`, 1e-9, []canonical.Difference{{"/a", "1", "1.000000002"}}},
		{"missing and added", `{"a":1,"b":"x"}`, `{"b":"x","c":null}`, 0, []canonical.Difference{{"/a", "1", "(absent)"}, {"/c", "(absent)", "null"}}},
		{"list lengths", `[1,2]`, `[1]`, 0, []canonical.Difference{{"/1", "2", "(absent)"}}},
		{"another kind", `{"a":"1"}`, `{"a":1}`, 1e-9, []canonical.Difference{{"/a", `"1"`, "1"}}},
		{"zero is near nothing else", `[0]`, `[1e-300]`, 1e-9, []canonical.Difference{{"/0", "0", "1e-300"}}},
	}
	for _, tt := range tests {
		t.Run(tt.name, func(t *testing.T) {
			got, err := canonical.Differences([]byte(tt.left), []byte(tt.right), tt.relative)
			if err != nil {
				t.Fatal(err)
			}
			if d := cmp.Diff(tt.want, got); d != "" {
				t.Error(d)
			}
		})
	}
	if _, err := canonical.Differences([]byte(`{`), []byte(`{}`), 0); err == nil {
		t.Error("broken JSON was compared")
	}
}
