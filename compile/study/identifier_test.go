package study

import "testing"

func TestFreeID(t *testing.T) {
	s := apply(t, New(), AddVariable{Variable{ID: "bees"}})
	for text, want := range map[string]string{
		"Hedge density (m/ha)": "Hedge_density_m_ha",
		"bees":                 "bees_1",
		"log":                  "log_1",
		"by":                   "by_1",
		"2001 yield":           "v2001_yield",
		"σ":                    "sigma",
		"θερμοκρασία":          "θερμοκρασία",
		"  %  ":                "v",
		"":                     "v",
		"a__b":                 "a_b",
		"_a_":                  "a",
	} {
		got := s.FreeID(text)
		if got != want {
			t.Errorf("%q gives %q, want %q", text, got, want)
		}
		if _, err := (AddVariable{Variable{ID: got}}).Apply(s); err != nil {
			t.Errorf("%q: %v", got, err)
		}
	}
}

func TestIDOf(t *testing.T) {
	s := apply(t, New(), AddVariable{Variable{ID: "bees"}})
	for text, want := range map[string]string{
		"bees":                 "bees",
		"a__b":                 "a__b",
		"pH":                   "pH",
		"Hedge density (m/ha)": "Hedge_density_m_ha",
		"log":                  "log_1",
		"by":                   "by_1",
		"σ":                    "sigma",
		"2001 yield":           "v2001_yield",
		"  %  ":                "",
		"":                     "",
	} {
		got := IDOf(text)
		if got != want {
			t.Errorf("%q gives %q, want %q", text, got, want)
		}
		if got == "" || got == "bees" {
			continue
		}
		if _, err := (AddVariable{Variable{ID: got}}).Apply(s); err != nil {
			t.Errorf("%q: %v", got, err)
		}
	}
}
