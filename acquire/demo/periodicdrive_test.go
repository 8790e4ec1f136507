package demo

import (
	"math"
	"slices"
	"testing"

	"shakerwatch/acquire/rig"
)

func TestPeriodsRepeatToTheBit(t *testing.T) {
	at := func(rateHz float64, period int) *rig.Rig {
		r := RigFor("periodic")
		r.Source.RateHz, r.Periodic.Period = rateHz, period
		return r
	}
	for _, c := range []struct {
		name string
		rig  *rig.Rig
	}{
		{"skid", at(2560, 4096)},
		{"an odd period", at(2560, 4099)},
		{"white samples 16 frames apart", at(51200, 80000)},
		{"white samples a frame apart because the period is prime", at(10240, 9973)},
		{"shorter than the interpolator reaches", at(2560, 37)},
	} {
		t.Run(c.name, func(t *testing.T) {
			p := c.rig.Periodic
			repeats := p.SettlePeriods + p.KeepPeriods
			v, sub := currents(t, c.rig, 1, (periodicLead+2*repeats)*p.Period)
			period := p.Period * sub
			// the white samples that the interpolator reaches back, and where it does so beyond a period
			b := driveBand(c.rig.Source.RateHz, 1000, sub, 1).dividing(p.Period, sub)
			reach := newInterpolator(b).reach() * b.every
			for k := 1; (k+1)*period <= len(v); k++ {
				before, now := v[(k-1)*period:k*period], v[k*period:(k+1)*period]
				since := (k-periodicLead+repeats)%repeats*period - period // how long the one before has run when it starts
				switch from := max(0, reach-1-since); {
				case since == -period:
					if slices.Equal(before, now) {
						t.Errorf("period %d repeats the one before: want a new one", k)
					}
				case from < period && !slices.Equal(before[from:], now[from:]):
					t.Errorf("period %d differs from the one before: want the same bits from %d on", k, from)
				}
			}
		})
	}
}

func TestPeriodicDriveLevelAndDifference(t *testing.T) {
	r := RigFor("periodic")
	r.Periodic.SettlePeriods, r.Periodic.KeepPeriods = 1, 2
	v, _ := currents(t, r, 1, 60*4096)
	var power float64
	for _, i := range v {
		power += i * i
	}
	// 21 random blocks of 1.6 s of 1.1 kHz scatter by 0.4 %; four times that
	if rms := math.Sqrt(power / float64(len(v))); math.Abs(rms/defaultShaker.driveRMS-1) > 0.016 {
		t.Errorf("%g A rms: want %g", rms, defaultShaker.driveRMS)
	}
	r.Forces[0].Name = "S9"
	if other, _ := currents(t, r, 1, 60*4096); slices.Equal(v, other) {
		t.Error("two forces have the same periods")
	}
	r.Forces[0].Name = "S1"
	if other, _ := currents(t, r, 2, 60*4096); slices.Equal(v, other) {
		t.Error("two seeds give the same periods")
	}
}
