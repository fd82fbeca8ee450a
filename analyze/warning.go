package analyze

// Warning is something the reader must know beside the figures.
type Warning struct {
	Code string // stable word for machines
	Text string
}
