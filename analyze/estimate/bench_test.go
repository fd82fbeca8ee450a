package estimate

import (
	"math/rand/v2"
	"testing"
)

func BenchmarkFitBranch(b *testing.B) {
	for _, c := range []struct {
		name string
		ramped
	}{
		{"exact line", ramped{count: 47, noise: 0.1, step: 2.7}},
		{"0.0005 in", ramped{count: 47, noise: 2.4, step: 0.8}},
		{"0.00005 in", ramped{count: 4.7, noise: 0.3, step: 0.8}},
		{"fine", ramped{count: 1, noise: 2.4, step: 0.8}},
	} {
		b.Run(c.name, func(b *testing.B) {
			d, _, _ := c.draw(rand.New(rand.NewPCG(1, 1)))
			c.state(&d, 0.9)
			for b.Loop() {
				if _, err := FitBranch(d); err != nil {
					b.Fatal(err)
				}
			}
		})
	}
}
