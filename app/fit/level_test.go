package fit

import (
	"fmt"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"arrowroot/compile/study"
	"arrowroot/compile/table"
)

// SEMANTICS A5: what lives at a plate's level contributes one factor per
// level, not per row. Norris' 36 pairs are written three times, as if an item
// had three rows; the posterior must be that of 36 pairs. Counted per row the
// sds would be 58 % of it.
func TestLevelCountsOnce(t *testing.T) {
	long(t)
	t.Parallel()
	var c certified
	fromJSON(t, "norris", &c)
	text, err := os.ReadFile(filepath.Join(studies, "norris.csv"))
	if err != nil {
		t.Fatal(err)
	}
	lines := strings.Split(strings.TrimSpace(string(text)), "\n")
	rows := "item," + lines[0] + "\n"
	for range 3 {
		for i, l := range lines[1:] {
			rows += fmt.Sprintf("no %d,%s\n", i+1, l)
		}
	}
	req := request(t, "norris")
	if req.Table, err = table.Read("norris.csv", strings.NewReader(rows), table.Options{}); err != nil {
		t.Fatal(err)
	}
	edits := study.Several{Name: "repeat rows", Edits: []study.Edit{study.AddPlate{Plate: study.Plate{Name: "item"}}}}
	for _, v := range req.Study.Variables {
		to := *v
		to.Plates = []string{"item"}
		edits.Edits = append(edits.Edits, study.ChangeVariable{ID: v.ID, To: to})
	}
	if req.Study, err = edits.Apply(req.Study); err != nil {
		t.Fatal(err)
	}
	req.Draws = 3000
	f := run(t, req).Full
	if f.Model.Rows.Used != 3*36 {
		t.Fatalf("%d rows", f.Model.Rows.Used)
	}
	sigma, factor := c.spread(5)
	check(t, "sigma", f.of(t, parameter("sigma_y")), sigma)
	check(t, "B1", f.of(t, parameter("beta_x_y")), moment{Mean: c.Coefficients[1], SD: c.Errors[1] * factor})
}
