package main

import (
	"context"
	"fmt"
	"log/slog"
	"sync"

	"shakerwatch/acquire"
	"shakerwatch/acquire/rig"
	"shakerwatch/cmd/internal/monitor"
	"shakerwatch/cmd/internal/results"
)

// A measurement is what live, replay and the demo have in common.
type measurement struct {
	rig    *rig.Rig
	kind   string         // as summary.json names it
	stream acquire.Source // all channels, as fast as they come
	pace   func(context.Context, acquire.Source) acquire.Source
	live   bool
	frames int64 // in the recording; 0 when nobody knows
	only   []int64
}

// measure runs a measurement to its end and writes its results.
func (a *app) measure(ctx context.Context, m measurement) (err error) {
	folder, err := a.openFolder()
	if err != nil {
		return unusable(err)
	}
	defer folder.Discard() // what holds results stays
	board, err := a.openDashboard(m)
	if err != nil {
		return unusable(err)
	}
	defer func() {
		if closeErr := board.close(); err == nil {
			err = closeErr
		}
	}()

	result, runErr := a.monitor(ctx, m, board)
	saved, err := a.save(folder, m, result)
	if err != nil {
		return err
	}
	a.tell(result, saved)
	if runErr != nil {
		board.ended("The source broke: " + runErr.Error() + ". " + saved)
		return fmt.Errorf("%s: %w: the results so far are kept", m.kind, runErr)
	}
	board.ended(saved)
	if board != nil {
		<-ctx.Done()
	}
	return nil
}

// monitor runs the pipeline, with everything that shows it, until it ends or the page asks to
// finish.
func (a *app) monitor(ctx context.Context, m measurement, board *dashboard) (*monitor.Result, error) {
	ctx, finish := context.WithCancel(ctx)
	var waiting sync.WaitGroup
	waiting.Go(func() {
		select {
		case <-board.finished():
			finish()
		case <-ctx.Done():
		}
	})
	defer waiting.Wait()
	defer finish()

	progress := newProgress(a.stderr, m, a.blocks)
	defer progress.close()
	c := monitor.Config{
		Rig:        m.rig,
		Source:     m.pace(ctx, m.stream),
		Live:       m.live,
		Blocks:     a.blocks,
		Only:       m.only,
		OnProgress: progress.show,
	}
	board.observe(&c)
	c.OnEvent = alsoTell(c.OnEvent, a, progress)
	return monitor.Run(ctx, c)
}

// openFolder is nil without --out.
func (a *app) openFolder() (*results.Folder, error) {
	if a.out == "" {
		return nil, nil
	}
	return results.Open(a.out, a.replace)
}

// save writes the results and returns a sentence on where they are.
func (a *app) save(folder *results.Folder, m measurement, result *monitor.Result) (string, error) {
	if folder == nil {
		return "Nothing was saved: --out DIR was not given.", nil
	}
	source := results.Source{
		Kind: m.kind, RateHz: m.stream.RateHz(), Channels: m.stream.Channels(), Frames: m.frames,
	}
	if m.frames == 0 {
		source.Frames = result.Frames
	}
	if err := folder.Write(m.rig, source, result); err != nil {
		return "", err
	}
	return "Results are in " + a.out + ".", nil
}

// logger is for the developer: what the dashboard's server has to say.
func (a *app) logger() *slog.Logger {
	return slog.New(slog.NewTextHandler(a.stderr, &slog.HandlerOptions{Level: slog.LevelWarn}))
}
