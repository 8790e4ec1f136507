package demo

import (
	"testing"

	"shakerwatch/acquire/rig"
)

func TestSensorDigital(t *testing.T) {
	base := rig.Channel{Axis: "+z", Unit: "m/s^2", Sensitivity: 0.01, FullScaleV: 5, LimitV: 5}
	with := func(change func(c *rig.Channel)) rig.Channel {
		c := base
		change(&c)
		return c
	}
	for _, c := range []struct {
		name    string
		channel rig.Channel
		value   float64
		want    float64
	}{
		{"half of full scale", base, 250, 0.5},
		{"reversed axis", with(func(c *rig.Channel) { c.Axis = "-z" }), 250, -0.5},
		{"negative sensitivity", with(func(c *rig.Channel) { c.Sensitivity = -0.01 }), 250, -0.5},
		{"g", with(func(c *rig.Channel) { c.Unit, c.Sensitivity = "g", 0.1 }), 98.0665, float64(float32(0.2))},
		{"rounded to float32", base, 50, float64(float32(0.1))},
		{"clipped at the top, below 1", base, 600, 1 - 0x1p-24},
		{"clipped at the bottom", base, -600, -1},
		{"clipped by the conditioner", with(func(c *rig.Channel) { c.LimitV = 2.5 }), -400, -0.5},
	} {
		s := newSensor(c.channel, 2560, floor{}, 1)
		if got := s.digital(c.value); got != c.want {
			t.Errorf("%s: %v: want %v", c.name, got, c.want)
		}
	}
}

// What is clipped must be seen as an overrange: |digital full_scale| >= limit (1 - 2^-15).
func TestSensorClipsWhereAnOverrangeIsSeen(t *testing.T) {
	for _, limitV := range []float64{5, 4.7, 3.3, 0.1} {
		c := rig.Channel{Axis: "+z", Unit: "N", Sensitivity: 0.01, FullScaleV: 5, LimitV: limitV}
		s := newSensor(c, 2560, floor{}, 1)
		for _, value := range []float64{1e6, -1e6} {
			if got := s.digital(value); max(got, -got)*c.FullScaleV < limitV*(1-0x1p-15) {
				t.Errorf("limit %g V: %v at the clip: want an overrange", limitV, got)
			}
		}
	}
}
