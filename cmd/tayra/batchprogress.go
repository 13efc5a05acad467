package main

import (
	"io"
	"sync/atomic"
	"time"

	"github.com/vbauerster/mpb/v8"
	"github.com/vbauerster/mpb/v8/decor"
)

// batchProgress is the bar on a terminal: rows, rows a second, time left. Off a
// terminal there is none.
type batchProgress struct {
	bars *mpb.Progress
	bar  *mpb.Bar
	rows atomic.Int64
}

// newBatchProgress shows a bar for a table of so many bytes, 0 if that is not
// known.
func newBatchProgress(stderr io.Writer, size int64) *batchProgress {
	p := &batchProgress{}
	if width, ok := terminalWidth(stderr); !ok || width == 0 {
		return p
	}
	start := time.Now()
	perSecond := func(decor.Statistics) string {
		rate := float64(p.rows.Load()) / max(time.Since(start).Seconds(), 1e-3)
		return "  " + withCommas(int(rate)) + " rows a second"
	}
	p.bars = mpb.New(mpb.WithOutput(stderr), mpb.WithWidth(30), mpb.WithRefreshRate(150*time.Millisecond))
	after := []decor.Decorator{decor.Any(perSecond)}
	var filler mpb.BarFillerBuilder = mpb.SpinnerStyle()
	if size > 0 {
		filler = mpb.BarStyle().Lbound("[").Filler("#").Tip("#").Padding(".").Rbound("]")
		after = append(after, decor.AverageETA(decor.ET_STYLE_GO, decor.WC{W: 10}), decor.Name(" left"))
	}
	p.bar = p.bars.New(size, filler, mpb.BarRemoveOnComplete(),
		mpb.PrependDecorators(decor.Any(func(decor.Statistics) string { return withCommas(int(p.rows.Load())) + " rows  " })),
		mpb.AppendDecorators(after...))
	return p
}

// tell moves the bar.
func (p *batchProgress) tell(rows int, read int64) {
	p.rows.Store(int64(rows))
	if p.bar != nil {
		p.bar.SetCurrent(read)
	}
}

// end takes the bar away.
func (p *batchProgress) end() {
	if p.bar == nil {
		return
	}
	p.bar.Abort(true)
	p.bars.Wait()
}
