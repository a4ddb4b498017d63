package main

import (
	"context"
	"os"
	"sync"

	"github.com/vbauerster/mpb/v8"
	"github.com/vbauerster/mpb/v8/decor"
)

// progressSteps is how finely a bar is drawn.
const progressSteps = 1000

// progress returns a function that draws the share of the work done, and one
// that ends the drawing. Both do nothing unless standard error is a terminal, or
// where --quiet or a CI service asks for silence.
func progress(ctx context.Context, std streams, what string, quiet bool) (tell func(float64), end func()) {
	if quiet || os.Getenv("CI") != "" || !isTerminal(std.err) {
		return nil, func() {}
	}
	p := mpb.NewWithContext(ctx, mpb.WithOutput(std.err), mpb.WithWidth(40))
	bar := p.New(progressSteps, mpb.BarStyle(), mpb.BarRemoveOnComplete(),
		mpb.PrependDecorators(decor.Name(what+" ")),
		mpb.AppendDecorators(decor.Percentage()))
	var mu sync.Mutex
	most := int64(0)
	tell = func(done float64) {
		mu.Lock()
		defer mu.Unlock()
		// Workers report out of order, and the bar does not go back, but for
		// the start of the next part of the work. End alone completes it.
		switch n := int64(done * progressSteps); {
		case n >= progressSteps:
			most = 0
		case n > most:
			most = n
			bar.SetCurrent(n)
		}
	}
	return tell, func() {
		bar.SetCurrent(progressSteps)
		p.Wait()
	}
}
