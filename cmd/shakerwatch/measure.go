package main

import (
	"context"
	"fmt"
	"log/slog"

	"shakerwatch/acquire"
	"shakerwatch/acquire/record"
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

	breaker *breaker // of the simulated rig; nil for others

	replayed  string // path of the recording that is replayed, empty otherwise
	interrupt func() // ends a Read that waits for ever; nil where none does

	record    func() (*record.Recorder, error) // nil when nothing is to be recorded
	recording string                           // path of the recording that is made
}

// measure runs a measurement to its end and writes its results.
func (a *app) measure(ctx context.Context, m measurement) (err error) {
	folder, err := a.openFolder(results.EstimatesFile, results.SummaryFile, results.EventsFile)
	if err != nil {
		return unusable(err)
	}
	defer folder.Discard() // what holds results stays
	noise, err := a.readNoise(m.rig)
	if err != nil {
		return unusable(err)
	}
	board, err := a.openDashboard(m)
	if err != nil {
		return unusable(err)
	}
	defer func() {
		if closeErr := board.close(); err == nil {
			err = closeErr
		}
	}()

	recorder, err := m.startRecorder()
	if err != nil {
		return unusable(err)
	}
	result, runErr := a.monitor(ctx, m, board, recorder, noise)
	a.closeRecorder(m, recorder)
	if m.replayed != "" && result.Averaged == 0 && result.Trouble != "" {
		return unusablef("%s: no block was found: %s", m.replayed, result.Trouble)
	}
	saved, err := a.save(folder, m, noise, result)
	if err != nil {
		return err
	}
	a.tell(result, saved)
	if runErr != nil {
		runErr = fmt.Errorf("%s: %w: results are of what came before", m.kind, runErr)
		saved = "The source broke. " + runErr.Error() + ". " + saved
	}
	board.ended(saved)
	if board != nil {
		<-ctx.Done()
	}
	return runErr
}

// monitor runs the pipeline, with everything that shows it, until it ends or the page asks to
// finish.
func (a *app) monitor(ctx context.Context, m measurement, board *dashboard, recorder *record.Recorder, noise *results.Noise) (*monitor.Result, error) {
	ctx, finish := context.WithCancel(ctx)
	waiting := board.onFinish(ctx, finish)
	defer waiting.Wait()
	defer finish()
	progress := newProgress(a.stderr, m, a.blocks)
	defer progress.close()
	c := monitor.Config{
		Rig:       m.rig,
		Source:    tee(m.pace, recorder)(ctx, m.stream),
		Live:      m.live,
		Interrupt: m.interrupt,
		Blocks:    a.blocks,
		Only:      m.only,
		Noise:     noise.Densities(),

		Confidence:   a.confidence,
		Simultaneous: a.simultaneous,

		Trouble:    func() []string { return recorderTrouble(recorder) },
		OnProgress: progress.show,
	}
	board.observe(&c)
	if m.breaker != nil {
		c.OnBreak = m.breaker.obey
	}
	c.OnEvent = alsoTell(c.OnEvent, a, progress)
	return monitor.Run(ctx, c)
}

// readNoise is nil without --noise.
func (a *app) readNoise(r *rig.Rig) (*results.Noise, error) {
	if a.noise == "" {
		return nil, nil
	}
	return results.ReadNoise(a.noise, r)
}

// startRecorder is nil when nothing is to be recorded.
func (m measurement) startRecorder() (*record.Recorder, error) {
	if m.record == nil {
		return nil, nil
	}
	return m.record()
}

// openFolder is nil without --out. Files of the given names are not overwritten without --replace.
func (a *app) openFolder(names ...string) (*results.Folder, error) {
	if a.out == "" {
		fmt.Fprintln(a.stdout, "Nothing will be saved: --out DIR was not given.")
		return nil, nil
	}
	if a.replace {
		names = nil
	}
	return results.Open(a.out, names...)
}

// save writes the results and returns a sentence on where they are.
func (a *app) save(folder *results.Folder, m measurement, noise *results.Noise, result *monitor.Result) (string, error) {
	if folder == nil {
		return "Nothing was saved: --out DIR was not given.", nil
	}
	source := results.Source{
		Kind: m.kind, RateHz: m.stream.RateHz(), Channels: m.stream.Channels(), Frames: m.frames,
	}
	if m.frames == 0 {
		source.Frames = result.Frames
	}
	if err := folder.Write(m.rig, source, noise, result); err != nil {
		remedy := "make room or mend the folder, then run again"
		if m.recording != "" {
			remedy = "make room or mend the folder, then replay " + m.recording
		}
		return "", fmt.Errorf("%w: %s", err, remedy)
	}
	return "Results are in " + a.out + ".", nil
}

// logger is for the developer: what the dashboard's server has to say.
func (a *app) logger() *slog.Logger {
	return slog.New(slog.NewTextHandler(a.stderr, &slog.HandlerOptions{Level: slog.LevelWarn}))
}
