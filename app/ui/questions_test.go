package ui

import "testing"

// A study asks several questions: another one is added, turned to and removed,
// each in one step that can be taken back.
func TestSeveralQuestions(t *testing.T) {
	b := fieldStudy(t)
	first := b.view.Question
	if !b.commands.find("another-question").ready() || b.commands.find("next-question").ready() {
		t.Error("a second question cannot be asked, or one question is turned round")
	}

	a := b.askAnother(b.capsule)
	if a.draft.Exposure != "" || a.keys["which"] != nil {
		t.Errorf("another question begins as %+v", a.draft)
	}
	a.pop.close()
	b.queue.drain()
	if len(b.view.Study.Questions) != 1 {
		t.Fatal("a question was added that nobody asked")
	}

	a = b.askAnother(b.capsule)
	a.keys["exposure"].(*chooser).SetSelected("soil")
	b.queue.drain()
	a.keys["outcome"].(*chooser).SetSelected("growth")
	b.queue.drain()
	a.ask()
	b.queue.drain()
	if q := b.view.Question; len(b.view.Study.Questions) != 2 || b.view.QuestionAt != 1 || q.Exposure != "soil" || q.Outcome != "growth" {
		t.Fatalf("question %d is %+v", b.view.QuestionAt, q)
	}

	b.commands.find("next-question").run()
	b.queue.drain()
	if b.view.QuestionAt != 0 || b.view.Question != first {
		t.Errorf("turned to question %d", b.view.QuestionAt)
	}
	a = b.askQuestion(b.capsule)
	a.keys["which"].(*chooser).SetSelected("2  soil → growth")
	b.queue.drain()
	if b.view.QuestionAt != 1 || a.draft.Exposure != "soil" {
		t.Errorf("the popover is about question %d, %+v", b.view.QuestionAt, a.draft)
	}
	a.pop.close()

	b.commands.find("remove-question").run()
	b.queue.drain()
	if len(b.view.Study.Questions) != 1 || b.view.Question != first {
		t.Errorf("%d questions, the present one %+v", len(b.view.Study.Questions), b.view.Question)
	}
	b.session.Undo()
	b.queue.drain()
	if b.view.QuestionAt != 1 || b.view.Question.Exposure != "soil" {
		t.Error("undo does not come back to the question that was removed")
	}
}

// A table can be taken out of the study; its variables stay, unbound.
func TestRemoveTheTable(t *testing.T) {
	b := fieldStudy(t)
	c := b.commands.find("remove-data")
	if !c.ready() || c.live() == "Remove the table" {
		t.Errorf("the command says %q", c.live())
	}
	c.run()
	b.queue.drain()
	if len(b.view.Study.Data) != 0 || b.view.Table != nil || b.view.Study.Variable("rain").Column != "" || c.ready() {
		t.Error("the table is still there")
	}
	b.session.Undo()
	b.queue.drain()
	b.wait("the table again", func() bool { return b.view.Table != nil })
	if b.view.Study.Variable("rain").Column == "" {
		t.Error("undo leaves rain unbound")
	}
}
