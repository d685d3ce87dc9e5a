package report

// style is how a curve is told from the others.
type style struct{ color, dash int }

// styles gives every series its own. With one run the curves differ by colour and dashes; with
// several, the colour is the run and the dashes are the kind. A law goes with the curve before it.
func (f *Figure) styles() []style {
	labels := map[string]int{}
	list := make([]style, len(f.Series))
	last := style{}
	for i, s := range f.Series {
		if s.Law {
			list[i] = last
			continue
		}
		if _, ok := labels[s.Label]; !ok {
			labels[s.Label] = len(labels)
		}
		k := labels[s.Label]
		last = style{k, k + k/len(dashes())} // when the colours begin again, the dashes do not
		if len(f.Runs) > 1 && s.Run >= 0 {
			last.color = s.Run
		}
		list[i] = last
	}
	return list
}

// key is an entry of the legend.
type key struct {
	name   string
	series int
	style  style
}

// keys are the entries of the legend. Laws that share one have one.
func (f *Figure) keys() []key {
	var list []key
	shared := map[string]bool{}
	for i, st := range f.styles() {
		s := &f.Series[i]
		name := f.Name(s.Label, s.Run)
		if s.Key != "" {
			name = s.Key
			if shared[name] {
				continue
			}
			shared[name] = true
		}
		list = append(list, key{name, i, st})
	}
	return list
}
