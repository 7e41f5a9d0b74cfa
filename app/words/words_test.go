package words

import (
	"math"
	"testing"

	"arrowroot/compile/model"
)

func TestNumbersForPeople(t *testing.T) {
	for _, c := range []struct {
		got, want string
	}{
		{Number(1.17352), "1.17"}, {Number(-0.045714), "−0.0457"}, {Number(0), "0"}, {Number(1234.5), "1234"}, {Number(99.96), "100.0"},
		{Number(1e-12), "1e−12"}, {Number(math.NaN()), "–"}, {Number(math.Inf(-1)), "−Inf"},
		{Percent(0.9), "90 %"}, {Percent(0.975), "97.5 %"},
		{Whole(1234567.2), "1 234 567"}, {Whole(-1234), "−1 234"}, {Whole(12), "12"},
		{List(nil), "nothing"}, {List([]string{"a"}), "a"}, {List([]string{"a", "b", "c"}), "a, b and c"},
		{Rows(model.Rows{Read: 252, Used: 252}), "all 252 rows"},
		{Rows(model.Rows{Read: 252, Used: 237, Lost: []model.Loss{{Variable: "bees", Rows: 15}}}), "237 of 252 rows (15 lack bees)"},
	} {
		if c.got != c.want {
			t.Errorf("%q, want %q", c.got, c.want)
		}
	}
}
