package fit

import (
	"context"
	"testing"
	"time"
)

// What is done after a cancel has an end, and a run that was not cancelled has
// none.
func TestGrace(t *testing.T) {
	t.Parallel()
	ctx, cancel := context.WithCancel(context.Background())
	late, done := grace(ctx, 20*time.Millisecond)
	defer done()
	if late.Err() != nil {
		t.Fatal("it ended before the cancel")
	}
	cancel()
	if late.Err() != nil {
		t.Error("it ended with the cancel")
	}
	select {
	case <-late.Done():
	case <-time.After(10 * time.Second):
		t.Error("it did not end")
	}
	other, done := grace(context.Background(), time.Millisecond)
	time.Sleep(5 * time.Millisecond)
	if other.Err() != nil {
		t.Error("nobody cancelled it")
	}
	done()
	if other.Err() == nil {
		t.Error("it was done with")
	}
}
