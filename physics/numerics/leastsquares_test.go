package numerics

import (
	"errors"
	"math"
	"testing"
)

// model is y = f(x; p) with derivatives, fitted to data with unit weights.
type model struct {
	name       string
	x, y       []float64
	start      []float64
	typical    []float64
	f          func(p []float64, x float64, d []float64) float64
	want, sd   []float64
	sum        float64
	startRatio float64
}

// Certified values of the NIST Statistical Reference Datasets for nonlinear
// regression (Misra1a, BoxBOD, MGH09; NIST, 1979–), data and values from memory.
var certified = []model{
	{name: "Misra1a",
		x:     []float64{77.6, 114.9, 141.1, 190.8, 239.9, 289.0, 332.8, 378.4, 434.8, 477.3, 536.8, 593.1, 689.1, 760.0},
		y:     []float64{10.07, 14.73, 17.94, 23.93, 29.61, 35.18, 40.02, 44.82, 50.76, 55.05, 61.01, 66.40, 75.47, 81.78},
		start: []float64{500, 1e-4}, typical: []float64{100, 1e-4},
		f: func(p []float64, x float64, d []float64) float64 {
			e := math.Exp(-p[1] * x)
			d[0], d[1] = 1-e, p[0]*x*e
			return p[0] * (1 - e)
		},
		want: []float64{2.3894212918e+02, 5.5015643181e-04}, sd: []float64{2.7070075241, 7.2668688436e-06}, sum: 1.2455138894e-01},
	{name: "BoxBOD",
		x: []float64{1, 2, 3, 5, 7, 10}, y: []float64{109, 149, 149, 191, 213, 224},
		start: []float64{100, 0.75}, typical: []float64{100, 0.1},
		f: func(p []float64, x float64, d []float64) float64 {
			e := math.Exp(-p[1] * x)
			d[0], d[1] = 1-e, p[0]*x*e
			return p[0] * (1 - e)
		},
		want: []float64{2.1380940889e+02, 5.4723748542e-01}, sd: []float64{1.2354515176e+01, 1.0455993237e-01}, sum: 1.1680088766e+03},
	{name: "MGH09",
		x:     []float64{4, 2, 1, 0.5, 0.25, 0.167, 0.125, 0.1, 0.0833, 0.0714, 0.0625},
		y:     []float64{0.1957, 0.1947, 0.1735, 0.16, 0.0844, 0.0627, 0.0456, 0.0342, 0.0323, 0.0235, 0.0246},
		start: []float64{0.25, 0.39, 0.415, 0.39}, typical: []float64{0.1, 0.1, 0.1, 0.1},
		f: func(p []float64, x float64, d []float64) float64 {
			u, v := x*x+x*p[1], x*x+x*p[2]+p[3]
			d[0], d[1], d[2], d[3] = u/v, p[0]*x/v, -p[0]*u*x/(v*v), -p[0]*u/(v*v)
			return p[0] * u / v
		},
		want: []float64{1.9280693458e-01, 1.9128232873e-01, 1.2305650693e-01, 1.3606233068e-01},
		sd:   []float64{1.1435312227e-02, 1.9633220911e-01, 8.0842031232e-02, 9.0025542308e-02}, sum: 3.0750560385e-04},
}

func (m model) problem() LeastSquaresProblem {
	d := make([]float64, len(m.start))
	return LeastSquaresProblem{Count: len(m.x), Typical: m.typical, Eval: func(p, r []float64, jac [][]float64) {
		for i, x := range m.x {
			r[i] = m.f(p, x, d) - m.y[i]
			if jac != nil {
				for j := range d {
					jac[j][i] = d[j]
				}
			}
		}
	}}
}

func TestLeastSquaresCertified(t *testing.T) {
	for _, m := range certified {
		res, err := LeastSquares(m.problem(), m.start, LeastSquaresSettings{})
		if err != nil || res.Status > RoundingFloor {
			t.Errorf("%s: %v, %v after %d iterations", m.name, err, res.Status, res.Iterations)
			continue
		}
		// certified values have 11 digits
		if e := math.Abs(res.Sum/m.sum - 1); e > 1e-10 {
			t.Errorf("%s: sum %v, certified %v", m.name, res.Sum, m.sum)
		}
		variance := res.Sum / float64(len(m.x)-len(m.want))
		for j, w := range m.want {
			if e := math.Abs(res.Params[j]/w - 1); e > 1e-9 {
				t.Errorf("%s: parameter %d %.12g, certified %.11g", m.name, j, res.Params[j], w)
			}
			if sd := math.Sqrt(variance * res.Inverse.At(j, j)); math.Abs(sd/m.sd[j]-1) > 1e-8 {
				t.Errorf("%s: standard deviation %d %.12g, certified %.11g", m.name, j, sd, m.sd[j])
			}
		}
		if res.LastStep > 1e-11 {
			t.Errorf("%s: last step %g, want the Gauss–Newton end", m.name, res.LastStep)
		}
	}
}

// With a bound across the way the answer is that of the smaller problem with the
// parameter fixed: a second road to the same minimum.
func TestLeastSquaresBound(t *testing.T) {
	m := certified[0]
	pr := m.problem()
	pr.Upper = []float64{230, math.Inf(1)}
	pr.Lower = []float64{0, 0}
	res, err := LeastSquares(pr, []float64{100, 1e-4}, LeastSquaresSettings{})
	if err != nil {
		t.Fatal(err)
	}
	one := model{x: m.x, y: m.y, start: []float64{1e-4}, typical: []float64{1e-4}, f: func(p []float64, x float64, d []float64) float64 {
		e := math.Exp(-p[0] * x)
		d[0] = 230 * x * e
		return 230 * (1 - e)
	}}
	ref, err := LeastSquares(one.problem(), one.start, LeastSquaresSettings{})
	if err != nil {
		t.Fatal(err)
	}
	if res.Params[0] != 230 || res.Bound[0] != 1 || res.Bound[1] != 0 || res.Inverse.At(0, 0) != 0 {
		t.Errorf("parameter %v, bound %v", res.Params[0], res.Bound)
	}
	if math.Abs(res.Params[1]/ref.Params[0]-1) > 1e-11 || math.Abs(res.Inverse.At(1, 1)/ref.Inverse.At(0, 0)-1) > 1e-9 {
		t.Errorf("%v %v, fixed: %v %v", res.Params[1], res.Inverse.At(1, 1), ref.Params[0], ref.Inverse.At(0, 0))
	}
	// started on the bound, it leaves again when the minimum lies inside
	pr.Upper[0] = 300
	res, err = LeastSquares(pr, []float64{300, 1e-4}, LeastSquaresSettings{})
	if err != nil || math.Abs(res.Params[0]/m.want[0]-1) > 1e-9 {
		t.Errorf("%v %v, want %v", err, res.Params, m.want)
	}
}

func TestLeastSquaresOddEnds(t *testing.T) {
	linear := LeastSquaresProblem{Count: 2, Eval: func(p, r []float64, jac [][]float64) {
		r[0], r[1] = p[0]+p[1]-1, 2*(p[0]+p[1]-1)
		if jac != nil {
			jac[0][0], jac[0][1], jac[1][0], jac[1][1] = 1, 2, 1, 2
		}
	}}
	res, err := LeastSquares(linear, []float64{5, 5}, LeastSquaresSettings{})
	if err != nil || res.Sum > 1e-20 {
		t.Errorf("degenerate: %v, sum %v", err, res.Sum)
	}
	if res.Inverse != nil && res.Inverse.At(0, 0) < 1e10 {
		t.Errorf("a singular problem has a covariance: %v", res.Inverse.At(0, 0))
	}
	nan := linear
	nan.Eval = func(p, r []float64, jac [][]float64) { r[0], r[1] = math.NaN(), 0 }
	if res, err := LeastSquares(nan, []float64{1, 1}, LeastSquaresSettings{}); err != nil || res.Status != NotFinite {
		t.Errorf("%v %v", err, res.Status)
	}
	for name, f := range map[string]func() error{
		"no parameters": func() error { _, err := LeastSquares(linear, nil, LeastSquaresSettings{}); return err },
		"slice length": func() error {
			p := linear
			p.Lower = []float64{1}
			_, err := LeastSquares(p, []float64{1, 1}, LeastSquaresSettings{})
			return err
		},
		"bounds": func() error {
			p := linear
			p.Lower, p.Upper = []float64{1, 1}, []float64{0, 2}
			_, err := LeastSquares(p, []float64{1, 1}, LeastSquaresSettings{})
			return err
		},
	} {
		if err := f(); !errors.Is(err, ErrProblem) {
			t.Errorf("%s: error %v, want ErrProblem", name, err)
		}
	}
	few := certified[2]
	if res, _ := LeastSquares(few.problem(), few.start, LeastSquaresSettings{MaxIterations: 2}); res.Status != IterationLimit || res.Iterations != 2 {
		t.Errorf("%v after %d, want the limit of 2", res.Status, res.Iterations)
	}
}

func BenchmarkLeastSquares(b *testing.B) {
	m := certified[2]
	for b.Loop() {
		if _, err := LeastSquares(m.problem(), m.start, LeastSquaresSettings{}); err != nil {
			b.Fatal(err)
		}
	}
}
