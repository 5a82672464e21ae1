package web

import (
	"slices"
	"strconv"

	"lossbook/web/view"
)

// The strip's measures, in px. Places along it are shares of its width; names are set
// so that they stay apart at the width of their layout, and so at any greater one.
// Narrower than the first, the stylesheet lists them instead.
const (
	stripFoot = 82  // where the bar ends
	lineStep  = 15  // from a name to its figures
	letter    = 5.8 // a letter of the strip's type, on the wide side
	inset     = 5.0 // from where a stretch begins to its name
	apart     = 10.0
)

var flowLayouts = []struct {
	class string
	width float64
}{{"mid", 640}, {"wide", 900}}

// setFlowNames lays the names of parts and items out for each width of a strip.
func setFlowNames(f *view.Flow, parts []stretch, items [][]stretch, loss float64) {
	height := 0
	for i, layout := range flowLayouts {
		l := view.FlowLayout{Class: layout.class, Inside: namesInside(items, layout.width, loss)}
		for _, p := range f.Parts {
			l.Names = append(l.Names, view.FlowName{Class: p.Class, Name: p.Name, Figures: p.Figures})
		}
		foot, fit := setNames(l.Names, parts, layout.width)
		if height = max(height, foot); i == 0 {
			f.Listed = !fit
		}
		f.Layouts = append(f.Layouts, l)
	}
	f.Height = strconv.Itoa(height)
}

// namesInside names the items that have room for it, with their share if that has
// room too.
func namesInside(items [][]stretch, width, loss float64) (list []view.FlowInside) {
	for _, it := range slices.Concat(items...) {
		for _, words := range []string{it.words + "\u2002" + shareWords(it.power, loss), it.words} {
			if lettersWide(words)+2*inset <= it.width*width {
				list = append(list, view.FlowInside{X: along(it.from + inset/width), Name: words})
				break
			}
		}
	}
	return list
}

// setNames puts the name of each part below it where it has the room, and those of
// the others, moved apart, further down. It returns where they end, and false if they
// have no room side by side.
func setNames(names []view.FlowName, parts []stretch, width float64) (foot int, fit bool) {
	foot = stripFoot
	var low []int
	for i := range parts {
		if n := &names[i]; nameWide(*n) <= parts[i].width*width {
			n.X = along(parts[i].from + inset/width)
			foot = stand(n, stripFoot+2)
		} else {
			low = append(low, i)
		}
	}
	if len(low) == 0 {
		return foot, true
	}
	return setLow(names, parts, low, width, foot+3)
}

// setLow sets the names that have no room below their parts. Their leaders bend at a
// height below the other names.
func setLow(names []view.FlowName, parts []stretch, low []int, width float64, bend int) (foot int, fit bool) {
	var wish, wide []float64
	for _, i := range low {
		room := nameWide(names[i])
		wish, wide = append(wish, parts[i].middle()*width-room/2), append(wide, room)
	}
	places, fit := spread(wish, wide, width)
	for k, i := range low {
		n, middle := &names[i], along(parts[i].middle())
		n.X = along((places[k] + inset) / width)
		foot = stand(n, bend+8)
		target := max(places[k]+inset, min(parts[i].middle()*width, places[k]+wide[k]-apart))
		n.Leader = []view.FlowLine{
			{X1: middle, Y1: strconv.Itoa(stripFoot), X2: middle, Y2: strconv.Itoa(bend)},
			{X1: middle, Y1: strconv.Itoa(bend), X2: along(target / width), Y2: strconv.Itoa(bend + 9)},
		}
	}
	return foot, fit
}

// stand sets a name and its figures below a height, and returns where they end.
func stand(n *view.FlowName, top int) (foot int) {
	n.NameY, n.FiguresY = strconv.Itoa(top+lineStep), strconv.Itoa(top+2*lineStep)
	return top + 2*lineStep + 4
}

// nameWide is the room that a part's name and figures need, with what keeps them from
// the next.
func nameWide(n view.FlowName) float64 {
	return max(lettersWide(n.Name), lettersWide(n.Figures)) + apart
}

func lettersWide(words string) float64 { return letter * float64(len([]rune(words))) }

// spread moves stretches, each with a wish for its beginning that rises, apart within
// [0, room]; false says that they are longer than that together.
func spread(wish, wide []float64, room float64) (places []float64, fit bool) {
	places = slices.Clone(wish)
	end := 0.0
	for i := range places {
		places[i] = max(places[i], end)
		end = places[i] + wide[i]
	}
	limit := room
	for i := len(places) - 1; i >= 0; i-- {
		places[i] = min(places[i], limit-wide[i])
		limit = places[i]
	}
	return places, limit >= 0
}
