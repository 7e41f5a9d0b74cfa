package ui

import (
	"bytes"
	"encoding/csv"
	"errors"
	"os"
	"path/filepath"
	"strings"

	"fyne.io/fyne/v2"

	"arrowroot/app/report"
	"arrowroot/assets"
	"arrowroot/canvas/draw"
	"arrowroot/canvas/scene"
	"arrowroot/compile/study"
)

// orSaved runs next, asking first if there is unsaved work.
func (d *desk) orSaved(next func()) {
	if !d.view.Dirty {
		next()
		return
	}
	var p *popover
	save := d.primary("Save", func() {
		p.close()
		d.saveThen(next)
	})
	body := column(10,
		bold("There is unsaved work"),
		para("Save the study before it goes away?", tokenMuted),
		row(8, space(),
			d.plain("Cancel", func() { p.close() }),
			d.plain("Drop it", func() { p.close(); next() }),
			save))
	area := d.win.Canvas().Size()
	p = d.kit.pop(d.win.Canvas(), body, fyne.NewPos((area.Width-360)/2, 120), 360)
	d.win.Canvas().Focus(save)
}

func (d *desk) newStudy() {
	d.orSaved(func() {
		d.forget()
		d.session.New()
	})
}

func (d *desk) openExample() {
	d.orSaved(func() {
		if err := d.showExample(); err != nil {
			d.complain(err.Error())
		}
	})
}

// showExample puts the built-in study in place, with the data it came with.
func (d *desk) showExample() error {
	text, err := assets.Example(assets.ExampleName)
	if err != nil {
		return err
	}
	doc, err := study.Read(assets.ExampleName, text)
	if err != nil {
		return err
	}
	files := make(map[string][]byte)
	for _, x := range doc.Data {
		if files[x.File], err = assets.Example(x.File); err != nil {
			return err
		}
	}
	d.forget()
	return d.session.OpenBuiltIn(doc, files)
}

// open puts the study at a path in place.
func (d *desk) open(path string) {
	if err := d.session.Open(path); err != nil {
		d.complain(unopened(err))
		return
	}
	d.forget()
	d.fitNext = false
	d.refresh()
	d.post(d.editor.ZoomFit)
}

// unopened says why a study was not opened, and that it is as it was: a fault
// in the file says so itself.
func unopened(err error) string {
	var fault *study.FileError
	if errors.As(err, &fault) {
		return err.Error()
	}
	return strings.TrimSuffix(err.Error(), ".") + ". The file was not opened and not changed."
}

// forget drops what the window remembers of the study before.
func (d *desk) forget() {
	d.pick, d.paint, d.complaint = scene.Selection{}, "", ""
	d.dismissed = make(map[string]bool)
	d.agreed, d.loss, d.status.hint = "", "", ""
	d.fitNext = true
}

func (d *desk) save() { d.saveThen(func() {}) }

func (d *desk) saveThen(next func()) {
	if d.view.Path == "" {
		d.askFile("Save the study", "Save", false, suggested(d.view.Study)+".arrowroot", []string{".arrowroot"}, func(path string) { d.saveTo(path, next) })
		return
	}
	d.saveTo(d.view.Path, next)
}

// saveTo writes the study; a name without an ending gets ours.
func (d *desk) saveTo(path string, next func()) {
	if filepath.Ext(path) == "" {
		path += ".arrowroot"
	}
	if err := d.session.Save(path); err != nil {
		d.complain("The study was not saved: " + err.Error())
		return
	}
	d.settle()
	next()
}

// suggested is a file name made of the study's title.
func suggested(s *study.Study) string {
	name := strings.ToLower(strings.Join(strings.FieldsFunc(s.Title, func(r rune) bool {
		return r == ' ' || r == '/' || r == '\\' || r == ':'
	}), "-"))
	return or(name, "study")
}

func (d *desk) openDialog() {
	d.orSaved(func() { d.askFile("Open a study", "Open", true, "", []string{".arrowroot"}, d.open) })
}

func (d *desk) saveDialog() {
	d.askFile("Save the study as", "Save", false, suggested(d.view.Study)+".arrowroot", []string{".arrowroot"}, func(path string) { d.saveTo(path, func() {}) })
}

func (d *desk) dataDialog() {
	d.askFile("Open data", "Open", true, "", []string{".csv", ".tsv", ".txt", ".tab"}, d.loadData)
}

func (d *desk) svgDialog() {
	d.askFile("Save the sheet as SVG", "Save", false, suggested(d.view.Study)+".svg", []string{".svg"}, d.saveSVG)
}

func (d *desk) reportDialog() {
	d.askFile("Save a report", "Save", false, suggested(d.view.Study)+".html", []string{".html"}, d.saveReport)
}

func (d *desk) reportInput() report.Input {
	v := d.view
	in := report.Input{Study: v.Study, Rival: v.Rival.Name, Question: v.Question, Graph: v.Graph, Reading: v.Reading, Findings: v.Findings, Evidence: v.Evidence, Result: v.Result, Checks: v.Checks}
	if !v.Prediction.Stale {
		in.Rivals = v.Prediction.Comparison
	}
	return in
}

// saveSVG writes the sheet as a picture for a paper.
func (d *desk) saveSVG(path string) {
	if filepath.Ext(path) == "" {
		path += ".svg"
	}
	var b bytes.Buffer
	err := draw.WriteSVG(&b, report.Sheet(d.reportInput()))
	if err == nil {
		err = os.WriteFile(path, b.Bytes(), 0o644)
	}
	d.saved(path, err)
}

// saveArrows writes what the rival supposes, arrow by arrow.
func (d *desk) saveArrows(path string) {
	if filepath.Ext(path) == "" {
		path += ".csv"
	}
	var b bytes.Buffer
	err := csv.NewWriter(&b).WriteAll(d.view.Study.ArrowTable(d.rival()))
	if err == nil {
		err = os.WriteFile(path, b.Bytes(), 0o644)
	}
	d.saved(path, err)
}

func (d *desk) arrowsDialog() {
	d.askFile("Save the arrow table", "Save", false, suggested(d.view.Study)+"-arrows.csv", []string{".csv"}, d.saveArrows)
}

// saveReport writes the whole study as one page.
func (d *desk) saveReport(path string) {
	if filepath.Ext(path) == "" {
		path += ".html"
	}
	var b bytes.Buffer
	err := report.WriteHTML(&b, d.reportInput())
	if err == nil {
		err = os.WriteFile(path, b.Bytes(), 0o644)
	}
	d.saved(path, err)
}

func (d *desk) saved(path string, err error) {
	if err != nil {
		d.complain("Not saved: " + err.Error())
		return
	}
	d.notice("Saved " + filepath.Base(path))
}
