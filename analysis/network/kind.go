package network

var names = [...]string{
	Type1: "type-1", Type2: "type-2", Type3: "type-3", Transconductance: "transconductance", Optocoupler: "optocoupler",
	TransferFunction: "transfer-function", Digital: "digital",
}

// String gives the spec format's name of the network; "unknown network" outside the enumeration.
func (k Kind) String() string {
	if k < Type1 || int(k) >= len(names) {
		return "unknown network"
	}
	return names[k]
}

// ParseKind finds the network that the spec format calls name.
func ParseKind(name string) (Kind, bool) {
	for _, k := range Kinds() {
		if names[k] == name {
			return k, true
		}
	}
	return 0, false
}

// Kinds lists every network in the order of the spec format.
func Kinds() []Kind {
	return []Kind{Type1, Type2, Type3, Transconductance, Optocoupler, TransferFunction, Digital}
}
