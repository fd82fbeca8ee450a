package main

import (
	"errors"
	"fmt"

	"github.com/spf13/pflag"

	"tautramp/acquire/mill"
	"tautramp/analyze"
)

// otherBand asks for a result as another band would give it, from the wheel pull
// that was measured.
type otherBand struct {
	name string
	worn string
}

func (o *otherBand) add(fs *pflag.FlagSet) {
	fs.StringVar(&o.name, "band", "", "work the result out for this band on file, from the wheel pull measured with another")
	fs.StringVar(&o.worn, "worn-width", "", "work it out for the band at this net width, such as \"5.0 in\": what grinding does at the same setting")
}

func (o *otherBand) asked() bool { return o.name != "" || o.worn != "" }

// of gives the result for the band that was asked for.
func (o *otherBand) of(res *analyze.Result, target mill.Pressure) (*analyze.Result, error) {
	band := res.Setup.Band
	if o.name != "" {
		var err error
		if band, err = (&mill.Profile{Bands: res.Setup.Bands}).FindBand(o.name); err != nil {
			return nil, err
		}
	}
	if o.worn != "" {
		width, err := o.width(band)
		if err != nil {
			return nil, err
		}
		band.NetWidth = width
	}
	return res.ForBand(band, target)
}

// width is the worn width, refused where it cannot be that band's.
func (o *otherBand) width(band mill.Band) (mill.Length, error) {
	q, err := mill.ParseQuantity(o.worn, mill.DimLength)
	if err != nil {
		return mill.Length{}, &usageError{"--worn-width: " + err.Error()}
	}
	if !(q.SI > band.Thickness.SI) {
		return mill.Length{}, &usageError{fmt.Sprintf("--worn-width: %s is no net width of a band %s thick", o.worn, band.Thickness)}
	}
	if q.SI > band.NetWidth.SI {
		return mill.Length{}, &usageError{fmt.Sprintf("--worn-width: %s is wider than the %s on file: grinding takes width away; write a new width into mill.toml", o.worn, band.NetWidth)}
	}
	return mill.Length{Quantity: q}, nil
}

// check refuses what no recording can make good.
func (o *otherBand) check() error {
	if o.worn == "" {
		return nil
	}
	_, err := mill.ParseQuantity(o.worn, mill.DimLength)
	if bad, ok := errors.AsType[*mill.QuantityError](err); ok {
		return &usageError{"--worn-width: " + bad.Error()}
	}
	return nil
}
