package view

// Waves are the waveforms at one point.
type Waves struct {
	Reason    string // why there are none
	Chart     Chart
	Intervals string // "Two periods of 4 µs; t1: the switch conducts, …"
}
