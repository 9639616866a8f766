package plant

// maxStates bounds the averaged model: two inductors, coupling capacitor, output branches, filter inductor and its two shunt branches.
const maxStates = 2 + 1 + maxBranches + 1 + 2

// The inputs stand behind the states: input voltage, the constant part of the load current, and 1 (for diode drops).
const (
	colInput = maxStates + iota
	colLoad
	colOne
	columns
)

// row is a linear form over states and inputs.
type row [columns]float64

// unit is the row that picks one column.
func unit(col int) (r row) { r[col] = 1; return r }

// add adds k·q.
func (r *row) add(k float64, q *row) {
	if k == 0 {
		return
	}
	for i := range r {
		r[i] += k * q[i]
	}
}

// scale multiplies by k.
func (r *row) scale(k float64) {
	for i := range r {
		r[i] *= k
	}
}

// dot applies the form to values of states and inputs.
func (r *row) dot(w *row) float64 {
	sum := 0.0
	for i := range r {
		sum += r[i] * w[i]
	}
	return sum
}

// layout says at which column each state stands; the (first) inductor's current is column 0. Absent states share the column of the next.
type layout struct {
	second, coupling int // of a two-inductor topology
	bank             int // first output branch's voltage
	series, shunt    int // filter: inductor current, first shunt branch's voltage
	order            int
}

// layout numbers the states of a stage.
func (s *Stage) layout() layout {
	l := layout{second: 1, coupling: 1, bank: 1}
	if s.Second.Inductance > 0 {
		l.coupling, l.bank = 2, 3
	}
	l.series = l.bank + s.branchCount
	l.order = l.series
	if s.HasFilter {
		l.shunt = l.series + 1
		l.order = l.shunt + s.shuntCount
	}
	return l
}
