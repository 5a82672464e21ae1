package assets

import (
	"context"
	"encoding/json"
	"fmt"
	"html/template"
	"math"
	"os"
	"path/filepath"
	"testing"

	"github.com/chromedp/chromedp"
)

type cell struct{ Class, Text string }

type row struct {
	Part, Name string
	Head       bool
	Cells      []cell
}

type galleryData struct {
	HTMXConfig        string
	Efficiency, Stack template.HTMLAttr
	Difference, Map   template.HTMLAttr
	Loads             []int
	Rows              []row
}

var loads = []int{5, 10, 20, 25, 30, 50, 75, 100}

// gallery returns awkward data for the gallery page: lines that nearly meet, a
// gap, a part of the curve outside its range, a load without figures.
func gallery() galleryData {
	return galleryData{
		HTMXConfig: HTMXConfig, Efficiency: dataAttribute(efficiencyData()), Stack: dataAttribute(stackData("0.23")),
		Difference: dataAttribute(differenceData()), Map: dataAttribute(mapData()),
		Loads: loads, Rows: galleryRows(),
	}
}

// dataAttribute returns a chart's data as a whole attribute, because the template
// package takes an attribute called data for an address.
func dataAttribute(data any) template.HTMLAttr {
	text, err := json.Marshal(data)
	if err != nil {
		panic(err) // the data above is plain numbers and words
	}
	return template.HTMLAttr(`data="` + template.HTMLEscapeString(string(text)) + `"`)
}

func efficiencyData() Lines {
	line := func(name string, dash int, drop float64) Line {
		var points []Point
		for load := 5.0; load <= 100; load += 2.5 {
			points = append(points, Point{
				X: load, Y: 96 - 14/load*4 - drop*load/100,
				None: dash == 1 && load > 40 && load < 50, Outside: dash == 2 && load > 80,
			})
		}
		return Line{Name: name, Dash: dash, Points: points}
	}
	return Lines{
		Title:  "Efficiency against load",
		X:      Axis{Label: "load, % of 2 A", Unit: "%"},
		Y:      Axis{Label: "efficiency, %", Unit: "%"},
		Series: []Line{line("12 V", 0, 1.5), line("14.4 V", 1, 0.8), line("10.5 V", 2, 1.7)},
	}
}

// differenceData crosses 0, touches it, and has a gap next to a lone point.
func differenceData() Lines {
	line := func(name string, dash int, at, slope float64) Line {
		l := Line{Name: name, Dash: dash}
		for i, load := range loads {
			l.Points = append(l.Points, Point{X: float64(load), Y: at + slope*float64(load), None: dash == 1 && i%2 == 0, Outside: dash == 2 && load > 50})
		}
		return l
	}
	return Lines{
		Title: "Efficiency against revision 1", X: Axis{Label: "load, % of 2 A", Unit: "%"}, Y: Axis{Label: "difference, percentage points", Unit: "points"},
		Series: []Line{line("revision 2", 0, -0.4, 0.008), line("revision 3", 1, 0.003, 0), line("revision 4, “<i>” a long one", 2, 0.42, -0.009)},
	}
}

const mapAcross, mapUp = 40, 30

// mapData has everything at once: points out of reach below, a part that runs away in
// a corner, a limit exceeded at the right and one near it, a curve held flat.
func mapData() Map {
	m := Map{
		Title: "Efficiency over load and input voltage", X: Axis{Label: "load, % of 2 A", Unit: "%"}, Y: Axis{Label: "input, V", Unit: "V"},
		Value: Axis{Label: "efficiency, %", Unit: "%"}, Loss: Axis{Label: "loss, W", Unit: "W"}, Here: &[2]float64{50, 24},
	}
	for x := range mapAcross {
		m.Loads = append(m.Loads, 5*math.Pow(20, float64(x)/(mapAcross-1)))
	}
	for y := range mapUp {
		m.Vins = append(m.Vins, 9+float64(y))
	}
	settled := func(i int) bool { x, y := i%mapAcross, i/mapAcross; return y >= 4 && !(x >= 36 && y < 8) }
	for i := range mapAcross * mapUp {
		if !settled(i) {
			m.Values, m.Losses = append(m.Values, nil), append(m.Losses, nil)
			continue
		}
		load := m.Loads[i%mapAcross] / 100
		loss := 0.2 + 0.01*m.Vins[i/mapAcross] + 1.6*load*load
		value := math.Round(1e5*24*load/(24*load+loss)) / 1e3
		m.Values, m.Losses = append(m.Values, &value), append(m.Losses, &loss)
	}
	area := func(name, level string, holds func(x, y int) bool) MapArea {
		return MapArea{name, level, RunsOf(mapAcross*mapUp, func(i int) bool {
			return holds(i%mapAcross, i/mapAcross) && settled(i) == (level == "exceeded" || level == "caution")
		})}
	}
	m.Outside = RunsOf(mapAcross*mapUp, func(i int) bool { return i%mapAcross == 0 && settled(i) })
	m.Unsettled = []MapArea{area("out of reach", "out_of_reach", func(_, y int) bool { return y < 4 }), area("switch runs away", "runaway", func(_, y int) bool { return y >= 4 })}
	m.Limits = []MapArea{
		area("rectifier, junction temperature", "exceeded", func(x, y int) bool { return x+y/2 > 34 }),
		area("<i>switch</i>, blocking voltage", "exceeded", func(x, y int) bool { return y > mapUp-3 && x < 4 }),
		area("inductor, saturation", "caution", func(x, _ int) bool { return x > 24 }),
	}
	return m
}

func stackData(firstTotal string) Stack {
	stack := Stack{
		Title: "Loss against load, by part",
		X:     Axis{Label: "load, % of 2 A", Unit: "%"},
		Y:     Axis{Label: "loss, W", Unit: "W"},
		Parts: []Part{
			{"Switch", "p-switch"}, {"Rectifier", "p-rectifier"}, {"Inductor", "p-inductor"},
			{"Capacitors", "p-capacitors"}, {"Drive and controller", "p-drive"}, {"Copper and shunts", "p-layout"},
		},
	}
	for _, load := range loads[:7] {
		f := float64(load) / 100
		values := []float64{0.04 + 0.36*f*f, 0.78 * f, 0.06 + 0.6*f*f, 0.003, 0.081, 0.3 * f * f}
		sum := 0.0
		for _, v := range values {
			sum += v
		}
		stack.Columns = append(stack.Columns, Column{X: fmt.Sprint(load), Values: values, Total: fmt.Sprintf("%.2f", sum), Outside: load == 75})
	}
	stack.Columns[0].Total = firstTotal
	stack.Columns = append(stack.Columns, Column{X: "100", Reason: "out of reach"})
	return stack
}

func galleryRows() []row {
	rows := []row{}
	for i, part := range []string{"p-switch", "p-rectifier", "p-inductor", "p-capacitors", "p-drive", "p-layout"} {
		rows = append(rows, row{Part: part, Name: part[2:], Head: true, Cells: cells(i, true)})
		for j := range 3 {
			rows = append(rows, row{Part: part, Name: fmt.Sprintf("item %d", j+1), Cells: cells(i*3+j, false)})
		}
	}
	return rows
}

func cells(seed int, head bool) []cell {
	out := make([]cell, 7)
	for i := range out {
		class := fmt.Sprintf("s%d", (seed+i)%11)
		if head {
			class = ""
		}
		if seed == 4 && i > 4 {
			class += " mark"
		}
		out[i] = cell{Class: class, Text: fmt.Sprint(math.Round(10 * math.Exp(float64(i+seed%3)/1.5)))}
	}
	return out
}

func TestGalleryIsAccessible(t *testing.T) {
	axe, err := os.ReadFile("../testdata/vendor/axe.min.js")
	if err != nil {
		t.Fatal(err)
	}
	for _, scheme := range []string{"light", "dark"} {
		t.Run(scheme, func(t *testing.T) {
			ctx := openGallery(t, 1440, scheme)
			do(t, ctx, chromedp.Evaluate[chromedp.Void](string(axe)))
			result := eval[struct {
				Passes     int
				Violations []string
			}](t, ctx, `axe.run({preload: false}).then(r => ({passes: r.passes.length, violations: r.violations.flatMap(v =>
				v.nodes.map(n => v.id + ': ' + n.html.slice(0, 160) + ' ' + n.failureSummary))}))`)
			if result.Passes < 20 {
				t.Errorf("axe passed only %d rules: did it see the page?", result.Passes)
			}
			for _, violation := range result.Violations {
				t.Error(violation)
			}
		})
	}
}

func TestGalleryFitsEveryWidth(t *testing.T) {
	for _, scheme := range []string{"light", "dark"} {
		ctx := openGallery(t, 1440, scheme)
		for _, width := range []int64{1440, 900, 640, 320} {
			resize(t, ctx, width)
			want(t, ctx, `document.documentElement.scrollWidth`, int(width))
			takePictures(t, ctx, fmt.Sprintf("%d-%s", width, scheme))
		}
	}
}

// takePictures writes the window and the whole page where -shots says, for eyes
// to judge; without the flag it does nothing.
func takePictures(t *testing.T, ctx context.Context, name string) {
	t.Helper()
	if *shots == "" {
		return
	}
	for suffix, take := range map[string]chromedp.Action[[]byte]{"": chromedp.CaptureScreenshot(), "-whole": chromedp.FullScreenshot(100)} {
		picture, err := chromedp.Run(ctx, take)
		if err != nil {
			t.Fatal(err)
		}
		if err := os.WriteFile(filepath.Join(*shots, name+suffix+".png"), picture, 0o644); err != nil {
			t.Fatal(err)
		}
	}
}

func TestFontsLoad(t *testing.T) {
	ctx := openGallery(t, 1440, "light")
	for _, face := range []string{"400 16px 'Source Sans 3'", "600 16px 'Source Sans 3'", "400 16px 'Source Serif 4'", "italic 400 16px 'Source Serif 4'", "600 16px 'Source Serif 4'"} {
		want(t, ctx, fmt.Sprintf(`document.fonts.load(%q, 'AΩθ').then(f => f.length)`, face), 2)
	}
	// Figures of one width, so that columns of numbers line up.
	for _, figures := range []string{".head strong", ".ledger tbody tr:nth-child(2) td", "#vin + .u"} {
		want(t, ctx, fmt.Sprintf(`(() => {
			const figures = document.querySelector(%q), range = document.createRange();
			const width = (text) => { figures.textContent = text; range.selectNodeContents(figures); return range.getBoundingClientRect().width };
			return Math.abs(width('1111111') - width('0808080')) < 0.01 })()`, figures), true)
	}
}
