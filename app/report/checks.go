package report

import (
	"html/template"

	"arrowroot/app/paint"
	"arrowroot/app/words"
	"arrowroot/canvas/scene"
	"arrowroot/compile/replicate"
)

// mostCheckPlots is how many variables are drawn, the worst first.
const mostCheckPlots = 12

// checkPlots draws each checked variable over its replicates, and beside one
// that is not reproduced the check that is furthest out.
func checkPlots(c *replicate.Checks) (template.HTML, error) {
	if c == nil {
		return "", nil
	}
	var all template.HTML
	add := func(p *replicate.Picture, caption string) error {
		if p.Kind == replicate.NoPicture {
			return nil
		}
		picture, err := svg(paint.Replicates(280, 150, p, plotStyle(scene.Light())))
		all += template.HTML("<figure>") + picture + template.HTML("<figcaption>"+template.HTMLEscapeString(caption)+"</figcaption></figure>")
		return err
	}
	drawn := 0
	for _, v := range c.Variables {
		if len(v.Checks) == 0 || drawn == mostCheckPlots {
			continue
		}
		drawn++
		verdict := replicate.Reproduced
		if v.Failed() {
			verdict = "not reproduced"
		}
		if err := add(&v.Figure, v.ID+": "+verdict); err != nil {
			return "", err
		}
		if worst := v.Checks[0]; v.Failed() && worst.Picture.Up != v.Figure.Up {
			if err := add(&worst.Picture, v.ID+", "+words.CheckName(worst)); err != nil {
				return "", err
			}
		}
	}
	if drawn > 0 {
		all += template.HTML(`<p class="muted">Ink: the data. Soft: where 95 % of the replicates lie.</p>`)
	}
	return all, nil
}
