package study

import (
	"context"
	"reflect"
	"testing"
)

// What the engine sends must come out as what the fit found, bit for bit: the
// page's numbers are computed from it.
func TestEvidenceTravels(t *testing.T) {
	in, _ := inputsOf(t, "barrier-spread") // has limits, with infinities
	var rn Runner
	list, err := rn.Fit(context.Background(), in, Options{})
	if err != nil {
		t.Fatal(err)
	}
	data, err := EncodeEvidence(list)
	if err != nil {
		t.Fatal(err)
	}
	back, err := DecodeEvidence(data, in.Spectra())
	if err != nil {
		t.Fatal(err)
	}
	var page Runner
	page.Prime(in, back)
	if !page.Fitted(in) {
		t.Fatal("the page does not know the fits it was given")
	}
	there, err := rn.Run(context.Background(), in, Options{Samples: 50})
	if err != nil {
		t.Fatal(err)
	}
	here, err := page.Run(context.Background(), in, Options{})
	if err != nil {
		t.Fatal(err)
	}
	ends, err := DecodeEnds(EncodeEnds(there.Intervals()))
	if err != nil {
		t.Fatal(err)
	}
	if err := here.SetIntervals(ends); err != nil {
		t.Fatal(err)
	}
	a, err1 := there.JSON()
	b, err2 := here.JSON()
	if err1 != nil || err2 != nil || string(a) != string(b) {
		t.Errorf("the page's case file differs from the engine's (%v, %v)", err1, err2)
	}
	if !reflect.DeepEqual(list[0].Fit.Params, back[0].Fit.Params) {
		t.Error("parameters changed on the way")
	}
	if _, err := DecodeEvidence(data, in.Spectra()[:2]); err == nil {
		t.Error("evidence of other spectra accepted")
	}
	if err := here.SetIntervals(ends[:4]); err == nil {
		t.Error("intervals of other numbers accepted")
	}
}
