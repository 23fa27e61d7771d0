package decision

import "testing"

func TestBuiltInSetsParse(t *testing.T) {
	names := BuiltInNames()
	if len(names) < 2 {
		t.Fatalf("built-in sets: %v", names)
	}
	for _, n := range names {
		data, _ := BuiltIn(n)
		set, err := Parse(n+".yaml", data)
		if err != nil {
			t.Errorf("%s: %v", n, err)
			continue
		}
		if set.ID != n {
			t.Errorf("%s calls itself %s", n, set.ID)
		}
	}
}
