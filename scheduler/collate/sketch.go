package collate

import "math"

// sketch counts values in bins of which 64 make up a factor of two, so that a
// quantile is known to 1 % in 1 MiB, whatever the order of the values.
type sketch struct {
	bins  []uint64 // by the top bits of the value; made with the first one
	rows  int
	worst float64
}

// binShift drops all but the exponent and the first six bits of the fraction.
const binShift = 46

// add counts the sizes of values; missing ones are left out.
func (s *sketch) add(values []float64) {
	for _, v := range values {
		if v-v != 0 {
			continue
		}
		if s.bins == nil {
			s.bins = make([]uint64, 1<<(63-binShift))
		}
		v = math.Abs(v)
		s.bins[math.Float64bits(v)>>binShift]++
		s.rows++
		s.worst = max(s.worst, v)
	}
}

// median gives the middle of the bin that holds the median.
func (s *sketch) median() float64 {
	left := uint64(s.rows+1) / 2
	for i, n := range s.bins {
		if n < left {
			left -= n
			continue
		}
		if i == 0 {
			return 0
		}
		lo, hi := math.Float64frombits(uint64(i)<<binShift), math.Float64frombits(uint64(i+1)<<binShift)
		return min(lo+(hi-lo)/2, s.worst)
	}
	return 0
}
