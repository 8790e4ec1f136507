package main

import (
	"context"
	"fmt"
	"io"
	"os"
	"sync"

	"shakerwatch/acquire"
	"shakerwatch/cmd/internal/monitor"
	"shakerwatch/cmd/internal/results"
	"shakerwatch/estimate/setup"
	"shakerwatch/web"
)

// setupBlocks is how many blocks a stage of the setup check averages: enough for a level to half a
// decibel on a band of some lines, and for signs at driving points. Common practice, no source.
const setupBlocks = 16

// lowDrive is the share of its full drive at which the simulated rig runs on low: -10 dB.
const lowDrive = 0.316

// A setupCheck leads a person through the stages.
type setupCheck struct {
	*app
	in     *input
	board  *dashboard
	lines  <-chan struct{} // one for each Enter; closed when there is no terminal any more
	blocks int64
	state  web.SetupState
	taken  []setup.Measurement
}

// checkSetup measures noise with the shakers off, then looks at the signals with the shakers on low.
func (a *app) checkSetup(ctx context.Context, in *input) (err error) {
	folder, err := a.openFolder(results.NoiseFile, results.FindingsFile)
	if err != nil {
		return unusable(err)
	}
	defer folder.Discard()
	board, err := a.openDashboard(in.measurement)
	if err != nil {
		return unusable(err)
	}
	defer func() {
		if closeErr := board.close(); err == nil {
			err = closeErr
		}
	}()
	in.rig = in.rig.Continuous() // with the shakers off there is no burst and no period to find
	c := &setupCheck{app: a, in: in, board: board, lines: a.enters(in.kind), blocks: setupBlocks}
	if a.blocks > 0 {
		c.blocks = a.blocks
	}
	stagesCtx, finish := context.WithCancel(ctx)
	waiting := board.onFinish(stagesCtx, finish)
	runErr := c.stages(stagesCtx)
	finish()
	waiting.Wait()
	saved, err := c.save(folder)
	if err != nil {
		return err
	}
	fmt.Fprintf(a.stdout, "%s\n%s\n", c.state.Summary, saved)
	board.ended(saved)
	if board != nil && runErr == nil {
		<-ctx.Done()
	}
	return runErr
}

// stages goes through the stages until they are done or ctx ends.
func (c *setupCheck) stages(ctx context.Context) error {
	defer func() {
		c.state.Ended = true
		c.state.Findings = setup.Findings(c.in.rig, c.taken...)
		c.state.Summary = setup.Summary(c.state.Findings)
		c.board.publishSetup(c.state)
	}()
	for _, stage := range setup.Stages() {
		c.state.Stage, c.state.Waiting, c.state.Part = stage, true, 0
		c.prepare(stage)
		c.board.publishSetup(c.state)
		fmt.Fprintf(c.stdout, "\n%s: %s\nPress Enter when it is so.\n", stage.Name(), stage.Instruction())
		ready, err := c.wait(ctx)
		if err != nil || !ready {
			return err
		}
		if err := c.measure(ctx, stage); err != nil || ctx.Err() != nil {
			return err
		}
	}
	return nil
}

// prepare has the simulated rig do what a person would.
func (c *setupCheck) prepare(stage setup.Stage) {
	if c.in.drive == nil {
		return
	}
	if stage == setup.Low {
		c.in.drive(lowDrive)
	} else {
		c.in.drive(0)
	}
}

// wait shows levels until a person says that the rig is ready. It returns false when nobody will.
func (c *setupCheck) wait(ctx context.Context) (ready bool, err error) {
	ctx, stop := context.WithCancel(ctx)
	defer stop()
	var idle sync.WaitGroup
	idle.Go(func() {
		_, err = monitor.Run(ctx, c.config(ctx))
		stop()
	})
	ready = c.answer(ctx)
	stop()
	idle.Wait()
	return ready, err
}

// answer waits for Enter or the page's button.
func (c *setupCheck) answer(ctx context.Context) bool {
	for {
		select {
		case _, ok := <-c.lines:
			if ok {
				return true
			}
			c.lines = nil
			if c.board == nil {
				return false
			}
		case <-c.board.proceed():
			return true
		case <-ctx.Done():
			return false
		}
	}
}

// measure averages the blocks of a stage and says what they show.
func (c *setupCheck) measure(ctx context.Context, stage setup.Stage) error {
	c.state.Waiting = false
	c.board.publishSetup(c.state)
	progress := newProgress(c.stderr, c.in.measurement, c.blocks)
	tally := setup.NewTally(c.in.rig)
	config := c.config(ctx)
	config.Blocks = c.blocks
	config.OnFrames = tally.Add
	config.OnProgress = func(counts monitor.Counts) {
		c.state.Part = float64(counts.Averaged) / float64(c.blocks)
		c.board.publishSetup(c.state)
		progress.show(counts)
	}
	result, err := monitor.Run(ctx, config)
	progress.close()
	if result.Averaged > 0 {
		c.taken = append(c.taken, setup.Measurement{Stage: stage, Snapshot: result.Snapshot, Tally: tally})
		c.state.Done = append(c.state.Done, stage)
	}
	c.state.Findings = setup.Findings(c.in.rig, c.taken...)
	var ofStage []setup.Finding
	for _, f := range c.state.Findings {
		if f.Stage == stage {
			ofStage = append(ofStage, f)
		}
	}
	if writeErr := setup.WriteFindings(c.stdout, ofStage); err == nil {
		err = writeErr
	}
	return err
}

// config runs the source with nothing but levels.
func (c *setupCheck) config(ctx context.Context) monitor.Config {
	config := monitor.Config{Rig: c.in.rig, Source: c.in.pace(ctx, c.in.stream), Live: true}
	if c.board != nil {
		config.OnLevels = c.board.hub.PublishLevels
	}
	return config
}

// save writes the noise and the findings, and says where they are.
func (c *setupCheck) save(folder *results.Folder) (string, error) {
	if folder == nil {
		return "Nothing was saved: --out DIR was not given.", nil
	}
	if len(c.taken) == 0 {
		return "Nothing was saved: nothing was measured.", nil
	}
	if err := folder.WriteSetup(setup.NewNoise(c.in.rig, c.taken...), c.state.Findings); err != nil {
		return "", err
	}
	return "The noise measurement and the findings are in " + c.out + ".", nil
}

// enters gives a signal for every line that a person enters. A pipe has taken standard input; the
// person is at the terminal then.
func (a *app) enters(kind string) <-chan struct{} {
	lines := make(chan struct{})
	input := a.stdin
	if kind == "pipe" {
		terminal, err := os.Open("/dev/tty")
		if err != nil {
			close(lines)
			return lines
		}
		input = terminal
	}
	go func() { // ends with its input or the program: a read of a terminal can't be called off
		defer close(lines)
		for readLine(input) {
			lines <- struct{}{}
		}
	}()
	return lines
}

// readLine reads up to the end of a line, no further, and returns false at the end of the input.
func readLine(r io.Reader) bool {
	var b [1]byte
	for {
		if _, err := io.ReadFull(r, b[:]); err != nil {
			return false
		}
		if b[0] == '\n' {
			return true
		}
	}
}

// discard reads seconds of frames that nobody wants.
func discard(s acquire.Source, seconds float64) {
	buf := make([]float64, 1024*s.Channels())
	for left := int(seconds * s.RateHz()); left > 0; left -= 1024 {
		s.Read(buf)
	}
}
