package estimate

import (
	"encoding/json"
	"math"
)

// A Number is written to JSON as null when it is unknown (NaN) or infinite. Nothing else in the
// project writes null for a number.
type Number float64

// MarshalJSON writes the shortest text that reads back as the same number, or null.
func (n Number) MarshalJSON() ([]byte, error) {
	if math.IsNaN(float64(n)) || math.IsInf(float64(n), 0) {
		return []byte("null"), nil
	}
	return json.Marshal(float64(n))
}
