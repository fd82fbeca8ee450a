package main

import (
	"fmt"
	"io"
	"strconv"
	"strings"

	"tautramp/acquire/mill"
	"tautramp/acquire/simrig"
)

// plant puts the faults asked for on the rig.
func (o *rigOptions) plant(c *simrig.Config) error {
	for _, text := range o.faults {
		kind, number, _ := strings.Cut(text, "=")
		size, err := strconv.ParseFloat(strings.TrimSpace(number), 64)
		if err != nil {
			return &usageError{fmt.Sprintf("--fault: %q is not KIND=SIZE, such as \"stick-slip=0.05\"; --fault list shows the kinds", text)}
		}
		if err := simrig.Plant(c, simrig.Fault{Kind: simrig.FaultKind(strings.TrimSpace(kind)), Size: size}); err != nil {
			return &usageError{fmt.Sprintf("--fault %s: %v", text, err)}
		}
	}
	return nil
}

// listFaults writes what --fault takes.
func listFaults(w io.Writer) error {
	for _, row := range simrig.Faults() {
		unit := row.Unit
		if unit != "" {
			unit = " " + unit
		}
		if _, err := fmt.Fprintf(w, "%s: %s; %.3g to %.3g%s\n", row.Kind, row.Means, row.From, row.To, unit); err != nil {
			return err
		}
	}
	return nil
}

// pace takes rate and top in the quantities that the tensioner is worked by.
func (o *rigOptions) pace(t mill.Tensioner, d *simrig.Drive) error {
	rate, top, rateDim := &d.RatePaS, &d.TopPa, mill.DimPressure
	if t.SetBy != mill.SetByPressure {
		rate, top, rateDim = &d.TurnRadS, &d.TopSI, mill.DimAngle
	}
	for _, q := range []struct {
		flag, text string
		dim        mill.Dim
		to         *float64
	}{{"--rate", o.rate, rateDim, rate}, {"--top", o.top, t.SettingDim(), top}} {
		if q.text == "" {
			continue
		}
		quantity, err := mill.ParseQuantity(q.text, q.dim)
		if err != nil {
			return &usageError{q.flag + ": " + err.Error()}
		}
		*q.to = quantity.SI
	}
	if o.low != "" {
		low, err := mill.ParseQuantity(o.low, mill.DimPressure)
		if err != nil {
			return &usageError{"--low: " + err.Error()}
		}
		d.LowPa = low.SI
	}
	if d.TopSI != 0 {
		d.TopSI = t.Rising(d.TopSI)
	}
	return nil
}

// boardSpecs are the boards that are asked for.
func (o *rigOptions) boardSpecs() ([]simrig.BoardSpec, error) {
	if o.boards != 1 && o.boards != 2 {
		return nil, &usageError{"--boards must be 1 or 2"}
	}
	if !(o.speed > 0) || o.speed > 1000 {
		return nil, &usageError{"--speed must be above 0 and at most 1000"}
	}
	boards := make([]simrig.BoardSpec, o.boards)
	for i := range boards {
		// A computer that is busy for a second holds a fast rehearsal up for a minute.
		boards[i].QueueBytes = int(queueBytes * max(1, o.speed))
	}
	if o.boards == 2 {
		boards[1].TickPPM = o.ppm
	}
	return boards, nil
}
