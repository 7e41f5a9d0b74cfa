package session

import (
	"bytes"
	"crypto/sha256"
	"encoding/hex"
	"errors"
	"fmt"
	"os"
	"path/filepath"
	"strings"
	"time"

	"arrowroot/compile/study"
	"arrowroot/compile/table"
)

// loaded is a table on its way or here.
type loaded struct {
	table *table.Table
	err   error
	text  []byte // of a built-in file that has no place on disk; nil otherwise
}

// Open puts the study at path in place of the present one. On an error
// nothing has changed.
func (s *Session) Open(path string) error {
	doc, err := study.Load(path)
	if err != nil {
		return err
	}
	if full, err := filepath.Abs(path); err == nil {
		path = full
	}
	s.tables = make(map[string]*loaded)
	s.replace(doc, path)
	s.loadAll()
	s.show()
	return nil
}

// OpenBuiltIn puts a study in place that has no file yet. files are the bytes
// of the data files that it names; they are written beside the study when it
// is saved.
func (s *Session) OpenBuiltIn(doc *study.Study, files map[string][]byte) error {
	tables := make(map[string]*loaded)
	for _, d := range doc.Data {
		text, ok := files[d.File]
		if !ok {
			continue
		}
		t, err := table.Read(d.Name, bytes.NewReader(text), table.Options{})
		if err != nil {
			return err
		}
		tables[d.Name] = &loaded{table: t, text: text}
	}
	s.tables = tables
	s.replace(doc, "")
	s.show()
	return nil
}

// New puts an empty study in place.
func (s *Session) New() {
	s.tables = make(map[string]*loaded)
	s.replace(study.New(), "")
	s.show()
}

// Save writes the study to path ("" = where it came from). Data files named
// relative to the old place are named relative to the new one.
func (s *Session) Save(path string) error {
	if path == "" {
		path = s.path
	}
	if path == "" {
		return errors.New("this study has no file yet: say where to save it")
	}
	full, err := filepath.Abs(path)
	if err != nil {
		return err
	}
	doc := s.study
	if s.folder() != filepath.Dir(full) {
		if doc, err = s.rebase(doc, filepath.Dir(full)); err != nil {
			return err
		}
	}
	if err := study.Save(full, doc); err != nil {
		return err
	}
	s.recovery.drop(s.path)
	s.path = full
	if doc != s.study {
		// A new place for the same data is no edit: undo has nothing to take back.
		s.study = doc
		s.loadAll()
		s.derive()
	}
	s.saved = s.study
	s.notice = "Saved " + filepath.Base(full)
	s.show()
	return nil
}

// rebase names data files from another folder, absolute ones too: a study and
// its data can then move together. Data that came with a built-in study are
// written there.
func (s *Session) rebase(doc *study.Study, folder string) (*study.Study, error) {
	for _, d := range doc.Data {
		if d.File == "" {
			continue
		}
		to := *d
		if l := s.tables[d.Name]; l != nil && l.text != nil {
			to.File = filepath.Base(d.File)
			if err := writeOnce(filepath.Join(folder, to.File), l.text); err != nil {
				return nil, err
			}
		} else {
			full := filepath.FromSlash(d.File)
			if !filepath.IsAbs(full) {
				full = filepath.Join(s.folder(), full)
			}
			full, err := filepath.Abs(full)
			if err != nil {
				return nil, err
			}
			if to.File, err = filepath.Rel(folder, full); err != nil {
				to.File = full // another drive
			}
			to.File = filepath.ToSlash(to.File)
		}
		next, err := study.ChangeData{Name: d.Name, To: to}.Apply(doc)
		if err != nil {
			return nil, err
		}
		doc = next
	}
	return doc, nil
}

// writeOnce writes a data file that is not there yet. One with other contents
// is never written over.
func writeOnce(path string, text []byte) error {
	have, err := os.ReadFile(path)
	switch {
	case err == nil && bytes.Equal(have, text):
		return nil
	case err == nil:
		return fmt.Errorf("%s is there already and differs from this study's data: save the study in another folder", path)
	case !errors.Is(err, os.ErrNotExist):
		return err
	}
	return os.WriteFile(path, text, 0o644)
}

// LoadData reads a table from a file and adds it to the study, binding
// variables whose name is a column's. done gets the outcome on the window's
// goroutine.
func (s *Session) LoadData(path string, done func(*table.Table, error)) {
	go func() {
		t, err := table.ReadFile(path)
		s.post(func() {
			if err == nil {
				err = s.adopt(path, t)
			}
			done(t, err)
		})
	}()
}

func (s *Session) adopt(path string, t *table.Table) error {
	name := strings.TrimSuffix(filepath.Base(path), filepath.Ext(path))
	file := path
	if full, err := filepath.Abs(path); err == nil {
		file = full
		if s.path != "" {
			if rel, err := filepath.Rel(s.folder(), full); err == nil {
				file = filepath.ToSlash(rel)
			}
		}
	}
	data := study.Data{Name: name, File: file, SHA256: t.SHA256, Rows: t.Rows}
	edits := []study.Edit{}
	if old := s.study.DataOf(s.rival); old != nil {
		data.Keep = old.Keep
		edits = append(edits, study.ChangeData{Name: old.Name, To: data})
	} else {
		edits = append(edits, study.AddData{Data: data})
	}
	for _, v := range s.study.Variables {
		if v.Unmeasured || v.Computed != "" || t.Column(v.Column) != nil && v.Column != "" {
			continue
		}
		if c := match(t, v); c != nil {
			edits = append(edits, study.ChangeVariable{ID: v.ID, To: Bound(*v, c)})
		}
	}
	s.tables[name] = &loaded{table: t}
	if err := s.Do(study.Several{Name: "Open data " + filepath.Base(path), Edits: edits}); err != nil {
		return err
	}
	s.derive()
	s.notice = fmt.Sprintf("%s: %d rows, %d columns", filepath.Base(path), t.Rows, len(t.Columns))
	s.show()
	return nil
}

// match finds the column that a variable is called after: by identifier or
// label, letter case and punctuation aside.
func match(t *table.Table, v *study.Variable) *table.Column {
	for _, c := range t.Columns {
		if n := plain(c.Name); n == plain(v.ID) || v.Label != "" && n == plain(v.Label) {
			return c
		}
	}
	return nil
}

func plain(s string) string {
	return strings.Map(func(r rune) rune {
		if strings.ContainsRune(" _-.", r) {
			return -1
		}
		return r
	}, strings.ToLower(s))
}

// Bound is the variable bound to a column, with the scale and levels that the
// column proposes where the user has said nothing yet.
func Bound(v study.Variable, c *table.Column) study.Variable {
	p := table.Propose(c)
	v.Column = c.Name
	v.Unmeasured = false
	if v.Scale == "" {
		v.Scale = study.Scale(p.Scale)
	}
	if len(v.Levels) == 0 && (v.Scale == study.Category || v.Scale == study.Ordered || v.Scale == study.Binary) {
		v.Levels = p.Levels
	}
	return v
}

// table is the table of the present rival as it stands; nil if there is none.
func (s *Session) table() *loaded {
	if d := s.study.DataOf(s.rival); d != nil {
		return s.tables[d.Name]
	}
	return nil
}

// loadAll reads the tables that the study names and that are not here yet.
func (s *Session) loadAll() {
	for _, d := range s.study.Data {
		if l := s.tables[d.Name]; l != nil && l.table != nil {
			continue
		}
		l := &loaded{}
		s.tables[d.Name] = l
		folder, data := s.folder(), *d
		go func() {
			t, err := ReadData(folder, &data)
			s.post(func() {
				if s.tables[data.Name] != l {
					return
				}
				l.table, l.err = t, err
				s.derive()
				s.show()
			})
		}()
	}
}

// ReadData reads the table that a study names, from a folder. The error says
// what to do.
func ReadData(folder string, d *study.Data) (*table.Table, error) {
	if d.Text != "" {
		return table.Read(d.Name, strings.NewReader(d.Text), table.Options{})
	}
	if d.File == "" {
		return nil, fmt.Errorf("the data %q were left out of this study: open them from the Data menu", d.Name)
	}
	path := filepath.FromSlash(d.File)
	if !filepath.IsAbs(path) {
		path = filepath.Join(folder, path)
	}
	t, err := table.ReadFile(path)
	if errors.Is(err, os.ErrNotExist) {
		return nil, fmt.Errorf("%s is not where the study says: open it from the Data menu", path)
	}
	return t, err
}

// A recovery keeps unsaved work in a file of its own, a few seconds behind the
// hand, until it is saved.
type recovery struct {
	folder string // "" = no place to keep it
	timer  *time.Timer
}

const recoveryDelay = 2 * time.Second

func newRecovery() *recovery {
	cache, err := os.UserCacheDir()
	if err != nil {
		return &recovery{}
	}
	return &recovery{folder: filepath.Join(cache, "arrowroot", "unsaved")}
}

func (r *recovery) file(path string) string {
	sum := sha256.Sum256([]byte(path))
	return filepath.Join(r.folder, hex.EncodeToString(sum[:8])+".arrowroot")
}

// note writes the session's study in a moment, unless it is saved by then.
func (r *recovery) note(s *Session) {
	if r.folder == "" {
		return
	}
	r.stop()
	if s.study == s.saved {
		if s.recovered == nil {
			_ = os.Remove(r.file(s.path))
		}
		return
	}
	path, doc := s.path, s.study
	r.timer = time.AfterFunc(recoveryDelay, func() {
		if err := os.MkdirAll(r.folder, 0o700); err != nil {
			return // no recovery is no reason to disturb the work
		}
		_ = study.Save(r.file(path), doc)
	})
}

func (r *recovery) stop() {
	if r.timer != nil {
		r.timer.Stop()
	}
}

func (r *recovery) drop(path string) {
	r.stop()
	if r.folder != "" {
		_ = os.Remove(r.file(path))
	}
}

// find gives unsaved work on path that differs from doc.
func (r *recovery) find(path string, doc *study.Study) *study.Study {
	if r.folder == "" {
		return nil
	}
	kept, err := study.Load(r.file(path))
	if err != nil || string(study.Write(kept)) == string(study.Write(doc)) {
		return nil
	}
	return kept
}

// Recover takes up the unsaved work, as an edit that can be undone.
func (s *Session) Recover() {
	if s.recovered == nil {
		return
	}
	s.history = append(s.history, moment{s.study, takeUp{}, s.rival, s.question})
	s.future = nil
	doc := s.recovered
	s.recovered = nil
	s.become(doc)
	s.loadAll()
}

// Forget drops the unsaved work.
func (s *Session) Forget() {
	s.recovered = nil
	s.recovery.drop(s.path)
	s.show()
}

// takeUp stands in the history for taking up unsaved work.
type takeUp struct{}

func (takeUp) Label() string                              { return "Take up unsaved work" }
func (takeUp) Apply(s *study.Study) (*study.Study, error) { return s, nil }
