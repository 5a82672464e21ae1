package budget

import (
	"math"
	"math/rand/v2"
	"testing"
)

// leaning is a problem with a response, as a stage of some watts may have them: its
// losses lean on the stage's loss and on the temperatures of their parts.
func leaning(seed uint64) (*problem, *response, unknowns) {
	c := rand.New(rand.NewPCG(seed, 2))
	m := &Model{enclosure: 4 * c.Float64()}
	s := &situation{m: m}
	p := &problem{s: s}
	l := &response{stage: 0.5*c.Float64() - 0.2, loss: 0.6*c.Float64() - 0.2}
	var x unknowns
	x[0] = 0.1 + c.Float64()
	for i := range l.heat {
		m.theta[i] = 20 * c.Float64()
		p.rise[i] = m.theta[i] + m.enclosure
		s.heating[i] = (c.Float64() - 0.3) * 0.03
		l.heat[i] = 0.2 * (c.Float64() - 0.2)
		x[i+1] = 0.1 + c.Float64()
	}
	return p, l, x
}

// dense is how g(x) answers to each unknown, element by element: a part's heat moves by
// l.heat with the stage's loss and by heating with its temperature, which moves by rise.
func dense(p *problem, l *response) (g matrix) {
	var byHeat [3]float64
	for i := range byHeat {
		byHeat[i] = p.s.heating[i] * p.rise[i]
	}
	g[0] = [4]float64{l.stage, byHeat[0], byHeat[1], byHeat[2]}
	for i, rise := range p.rise {
		theta, all := p.s.m.theta[i], p.s.m.enclosure
		if rise == 0 {
			continue
		}
		g[i+1][0] = (theta*l.heat[i] + all*l.loss) / rise
		for j := range byHeat {
			g[i+1][j+1] = all * byHeat[j] / rise
		}
		g[i+1][i+1] += theta * byHeat[i] / rise
	}
	return g
}

// TestNewtonStep holds the step against the four equations it solves.
func TestNewtonStep(t *testing.T) {
	taken := 0
	for seed := range uint64(300) {
		p, l, r := leaning(seed)
		if seed%5 == 0 { // a part that nothing heats
			p.s.m.enclosure, p.s.m.theta[seed%3], r[1+seed%3] = 0, 0, 0
			for i := range p.rise {
				p.rise[i] = p.s.m.theta[i]
			}
		}
		step, regular := p.newton(l, r)
		if !regular {
			continue
		}
		taken++
		g := dense(p, l)
		for i := range step {
			want := r[i]
			for j := range step {
				want += g[i][j] * step[j]
			}
			if math.Abs(step[i]-want) > 1e-12*(math.Abs(step[i])+step.norm()) {
				t.Errorf("seed %d: equation %d: step %g, want %g", seed, i, step[i], want)
			}
		}
	}
	if taken < 250 {
		t.Errorf("only %d steps", taken)
	}
	p, l, r := leaning(1)
	p.held = true
	if step, regular := p.newton(l, r); !regular || math.Abs(step[0]-r[0]/(1-l.stage)) > 1e-12 || step[1] != 0 || step[2] != 0 || step[3] != 0 {
		t.Errorf("held at ambient: %v, want only %g", step, r[0]/(1-l.stage))
	}
}

// TestNewtonRefuses takes each way in which heat can feed itself to just below where a
// step would go to infinity.
func TestNewtonRefuses(t *testing.T) {
	for name, lean := range map[string]func(p *problem, l *response, gain float64){
		"a part":           func(p *problem, l *response, gain float64) { p.s.m.theta[1], p.s.heating[1] = 10, gain/10 },
		"by the enclosure": func(p *problem, l *response, gain float64) { p.s.m.enclosure, p.s.heating[2] = 10, gain/10 },
		"the stage's loss": func(p *problem, l *response, gain float64) { l.stage = gain },
	} {
		for gain, want := range map[float64]bool{-3: true, 0: true, 0.9: true, 0.999: false, 1: false, 1.5: false} {
			p, l := &problem{s: &situation{m: &Model{}}}, &response{}
			lean(p, l, gain)
			for i := range p.rise {
				p.rise[i] = p.s.m.theta[i] + p.s.m.enclosure
			}
			step, regular := p.newton(l, unknowns{1, 1, 1, 1})
			if regular != want {
				t.Errorf("%s, gain %g: regular %v, want %v", name, gain, regular, want)
			}
			if far := 1 / (1 - gain); regular && math.Abs(max(step[0], step[1], step[2], step[3])-far) > 1e-12*far {
				t.Errorf("%s, gain %g: step %v, want %g", name, gain, step, far)
			}
		}
	}
}

// TestLearn asks that after a step the response tells what the step did: with the
// temperatures' doing, taken between before and after, it gives back every change.
func TestLearn(t *testing.T) {
	for seed := range uint64(50) {
		p, l, step := leaning(seed)
		p.held = seed%4 == 0
		before, now := p.s.sums, &p.s.sums
		for i := range now.heat {
			before.heat[i], now.heat[i] = float64(i)+0.5, float64(i)+0.1*step[i]
			now.heating[i] = 1.5*before.heating[i] + 0.001
		}
		before.stage, now.stage, before.loss, now.loss = 2, 2.3, 3, 3.7
		p.learn(l, &before, step)
		all := 0.0
		for i := range now.heat {
			byHeat := 0.0
			if !p.held {
				byHeat = (before.heating[i] + now.heating[i]) * p.rise[i] * step[i+1] / 2
			}
			all += byHeat
			compare(t, "heat", []printed{{"told", 10 + l.heat[i]*step[0] + byHeat, 10 + now.heat[i] - before.heat[i], 1e-13}})
		}
		compare(t, "sums", []printed{{"stage", 10 + l.stage*step[0] + all, 10.3, 1e-13}, {"loss", 10 + l.loss*step[0] + all, 10.7, 1e-13}})
	}
	p, l, _ := leaning(1)
	was, before := *l, p.s.sums
	p.s.loss = 5
	if p.learn(l, &before, unknowns{1e-9, 1, 1, 1}); *l != was {
		t.Error("it learns from a step that left the stage's loss as it was")
	}
}

// TestGuess takes the first guess for what it is: losses that rise with a power of the
// inductor current between the first and the second, and not at all where that current
// is the load's.
func TestGuess(t *testing.T) {
	for topology, vin := range map[string]float64{"boost": 6, "buck": 48, "buck_boost": 20} {
		d := quiet()
		d.Topology, d.Input = topology, Input{N(vin), N(vin), N(vin)}
		m, b := solved(t, d, Point{vin, 4, 25})
		p := problem{s: m.situationOf(b)}
		l := p.guess()
		if topology == "buck" {
			if l != (response{}) {
				t.Errorf("a buck's current is its load's: %+v", l)
			}
			continue
		}
		straight := 1 / (vin * b.Inductor.Mean) // A more in the inductor for a watt more, over what flows
		for what, x := range map[string]struct{ lean, of float64 }{"stage": {l.stage, p.s.stage}, "loss": {l.loss, p.s.stage}, "switch": {l.heat[0], p.s.heat[0]}, "inductor": {l.heat[2], p.s.heat[2]}} {
			if power := x.lean / (x.of * straight); !(power >= 1 && power <= 2) {
				t.Errorf("%s, %s: rises with the %g-th power of the current", topology, what, power)
			}
		}
	}
	if l := (&problem{s: &situation{}}).guess(); l != (response{}) {
		t.Errorf("no current: %+v", l)
	}
}

// TestHolds compares the proof with the matrix it is about: each row of the magnitudes,
// times the solution, against the solution.
func TestHolds(t *testing.T) {
	held, not := 0, 0
	for seed := range uint64(400) {
		p, l, x := leaning(seed)
		for i := range p.s.heating {
			p.s.heating[i] *= 3
		}
		if seed%3 == 0 {
			x[0] = -x[0]
		}
		abs := func(m matrix) (a matrix) {
			for i := range m {
				for j := range m {
					a[i][j] = math.Abs(m[i][j])
				}
			}
			return a
		}
		// the magnitudes are those of each path that a change takes, not of their sum
		path := *p
		path.s = &situation{m: p.s.m}
		for i := range p.s.heating {
			path.s.heating[i] = math.Abs(p.s.heating[i])
		}
		g := abs(dense(&path, &response{heat: [3]float64{math.Abs(l.heat[0]), math.Abs(l.heat[1]), math.Abs(l.heat[2])}, stage: math.Abs(l.stage), loss: math.Abs(l.loss)}))
		worst := 0.0
		for i := range x {
			back := 0.0
			for j := range x {
				back += g[i][j] * math.Abs(x[j])
			}
			worst = max(worst, back/math.Abs(x[i]))
		}
		got := p.holds(l, x)
		switch {
		case worst < 0.79:
			held++
			if !got {
				t.Errorf("seed %d: comes back by %g and is not held on to", seed, worst)
			}
		case worst > 0.81:
			not++
			if got {
				t.Errorf("seed %d: comes back by %g and is held on to", seed, worst)
			}
		}
		if p.held = true; !p.holds(l, x) {
			t.Errorf("seed %d: with the parts at ambient there is nothing to run away", seed)
		}
	}
	if held < 30 || not < 30 {
		t.Errorf("%d held, %d not: too few of either", held, not)
	}
}

// TestHeating holds the slopes that the steps are steered by against differences of
// the heat, where nothing but the named properties moves with temperature.
func TestHeating(t *testing.T) {
	compared := [3]int{}
	for seed := range uint64(120) {
		d := newChance(seed).design(1)
		d.Inductor.Winding = nil // its factor moves as well
		m, err := Prepare(d)
		if err != nil {
			t.Fatal(err)
		}
		for _, load := range []float64{0.05, 1} {
			var b Budget
			m.At(Point{d.Input.Nominal.V, load * d.Output.Current.V, d.Ambient.V}, &b)
			if b.State != Settled {
				continue
			}
			s := m.situationOf(&b)
			for part, got := range s.heating {
				want := s.heatSlope(part)
				if math.Abs(got-want) > 1e-6*math.Abs(want)+1e-9*s.heat[part] {
					t.Errorf("seed %d, load %g, %s: %g W/K, by a difference %g", seed, load, partNames[part], got, want)
				}
				if want != 0 {
					compared[part]++
				}
			}
		}
	}
	if min(compared[0], compared[1], compared[2]) < 100 {
		t.Errorf("only %v compared", compared)
	}
}
