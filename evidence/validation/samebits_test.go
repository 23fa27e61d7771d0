package validation

import (
	"crypto/sha256"
	"encoding/json"
	"fmt"
	"testing"
)

// TestSameBits guards that figures come out with the same bits on every processor: the digests were printed by this code, on amd64.
func TestSameBits(t *testing.T) {
	digest := func(v any) string {
		text, err := json.Marshal(v)
		if err != nil {
			t.Fatal(err)
		}
		return fmt.Sprintf("%x", sha256.Sum256(text))[:16]
	}
	var got []string
	for _, data := range [][]byte{testFile(t, "precision_lcms.csv"), []byte(wholeTable)} {
		rows, problems := Read("v.csv", data)
		if problems != nil {
			t.Fatal(problems)
		}
		figures, err := Appraise(rows, Options{Source: "v.csv"})
		if err != nil {
			t.Fatal(err)
		}
		got = append(got, digest(figures))
	}
	history, problems := ReadHistory("h.csv", testFile(t, "controls_lcms.csv"))
	if problems != nil {
		t.Fatal(problems)
	}
	charts, err := Charts(history, UsualDrift())
	if err != nil {
		t.Fatal(err)
	}
	got = append(got, digest(charts))
	if want := "[4374bd93c80c986b 056e817f54cf9dab 37bf9f50ee184354]"; fmt.Sprint(got) != want {
		t.Errorf("got %v, want %s", got, want)
	}
}
