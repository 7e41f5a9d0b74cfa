package ui

import (
	"slices"

	"arrowroot/app/words"
	"arrowroot/compile/model"
	"arrowroot/compile/study"
)

// A coefficientReading keeps what the coefficients of a model may be read as: asking anew at
// every refresh would cost a large sheet too much.
type coefficientReading struct {
	diagram *study.Diagram
	model   *model.Model
	labels  map[int]words.Coefficient
}

// coefficients labels the parameters of a model by the arrows on the sheet.
func (d *desk) coefficients(m *model.Model) map[int]words.Coefficient {
	diagram := d.view.Rival.Diagram
	for _, r := range d.labels {
		if r.diagram == diagram && r.model == m {
			return r.labels
		}
	}
	r := coefficientReading{diagram, m, words.Coefficients(d.view.Study, m)}
	d.labels = append(d.labels, r)
	if len(d.labels) > 2 { // of the fit and of the present model
		d.labels = slices.Clone(d.labels[1:])
	}
	return r.labels
}

// coefficient says what a parameter of the present model may be read as; "" if
// it is no coefficient.
func (d *desk) coefficient(p *model.Parameter) string {
	m := d.view.Model
	if m == nil {
		return ""
	}
	return d.coefficients(m)[slices.Index(m.Parameters, p)].Words
}
