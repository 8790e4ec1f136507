package demo

import (
	"shakerwatch/acquire/rig"
)

// A sensor is one transducer with its conditioner and converter.
type sensor struct {
	channel   int     // 0-based, of the stream
	sign      float64 // of its axis
	perUnit   float64 // digital per N or m/s²
	low, high float64 // digital values at which the chain clips
	sensorNoise
}

// newSensor returns the sensor of c with its own noise, drawn from seed.
func newSensor(c rig.Channel, rateHz float64, f floor, seed uint64) sensor {
	clip := c.LimitV / c.FullScaleV
	return sensor{
		channel:     c.Index,
		sign:        c.Sign(),
		perUnit:     1 / c.Scale(),
		low:         -clip,
		high:        clip * (1 - 0x1p-24), // so that full scale gives the largest float32 below 1
		sensorNoise: newSensorNoise(f, rateHz, stream(seed, "noise "+c.Name)),
	}
}

// digital returns what the chain makes of a force or acceleration along the positive axis: a
// fraction of full scale that float32 holds exactly, because recordings are float32.
func (s *sensor) digital(value float64) float64 { return s.amplified(value, 1) }

// amplified is digital with a gain too many, 1 for none.
func (s *sensor) amplified(value, gain float64) float64 {
	fraction := (s.sign*value + s.sensorNoise.next()) * gain * s.perUnit
	return s.clipped(fraction)
}

// clipped is a fraction of full scale as a recording holds it.
func (s *sensor) clipped(fraction float64) float64 {
	return float64(float32(max(s.low, min(s.high, fraction))))
}
