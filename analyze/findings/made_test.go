package findings

import "tautramp/analyze"

func emptyResult() *analyze.Result { return &analyze.Result{} }
