package metabolic

import (
	"errors"
	"fmt"
	"math"
	"sort"

	"gonum.org/v1/gonum/mat"
)

// The likelihood of nested random intercepts from sums by level.
//
// In units of the residual variance the covariance of the rows is
//
//	V = I + θ₃·Zg·Zg' + θ₂·Zf·Zf' + θ₁·Zo·Zo'
//
// (g genus, f family, o order): a tree, one block an order. With A = [X y] and
// W the covariance of one node's rows before its own intercept is added, W+θ11'
// has
//
//	A'(W+θ11')⁻¹1 = t/(1+θs)     t = A'W⁻¹1, s = 1'W⁻¹1
//	A'(W+θ11')⁻¹A = Q − θtt'/(1+θs)
//	ln|W+θ11'|    = ln|W| + ln(1+θs)
//
// (Sherman and Morrison, and the determinant lemma), so that one pass from the
// genera up gives X'V⁻¹X, X'V⁻¹y, y'V⁻¹y and ln|V|, and one pass down gives
// A'V⁻¹1 of any node. No n by n matrix is ever formed. The first column of X is
// 1 in every row, hence s is the first element of t.

// Positions of the three levels in θ and in the slices by level.
const (
	levelOrder = iota
	levelFamily
	levelGenus
	levels
)

// nestedNode is one order, family or genus and the range of its children: of
// rows for a genus, of genera for a family, of families for an order.
type nestedNode struct {
	from, to int
	rows     int
}

// nestedSums is the design of a fit, sorted by the tree: what stays the same
// while θ changes. Covariates and y are centred, which changes neither the
// likelihood nor the slopes and keeps digits.
type nestedSums struct {
	n, p, d int       // rows, columns of X, p + 1 columns of A
	place   []int     // place[k] is the caller's index of sorted row k
	a       []float64 // n rows of A = [1, covariates − mean, y − mean]
	mean    []float64 // d means, that of the first column taken as 0
	node    [levels][]nestedNode
	raw     []float64 // A'1 of every genus
	q       []float64 // A'A
	// held marks the variances that these rows cannot tell from another, kept
	// at zero.
	held [levels]bool
}

func newNestedSums(rows []NestedRow) (*nestedSums, error) {
	n := len(rows)
	if n == 0 {
		return nil, fmt.Errorf("nested fit: no rows: %w", ErrTooFewPoints)
	}
	p := 1 + len(rows[0].Covariates)
	if n < p+2 {
		return nil, fmt.Errorf("nested fit: %d rows for %d fixed effects, at least %d are needed: %w", n, p, p+2, ErrTooFewPoints)
	}
	for i, r := range rows {
		if r.Order == "" || r.Family == "" || r.Genus == "" {
			return nil, fmt.Errorf("nested fit: row %d has order %q, family %q, genus %q; all three are needed: %w", i+1, r.Order, r.Family, r.Genus, ErrBadValue)
		}
		if len(r.Covariates) != p-1 {
			return nil, fmt.Errorf("nested fit: row %d (%s) has %d covariates and the first row %d: %w", i+1, r.Genus, len(r.Covariates), p-1, ErrBadValue)
		}
		for _, v := range append([]float64{r.Y}, r.Covariates...) {
			if !isFinite(v) {
				return nil, fmt.Errorf("nested fit: row %d (%s) holds %v: %w", i+1, r.Genus, v, ErrBadValue)
			}
		}
	}

	s := &nestedSums{n: n, p: p, d: p + 1, place: make([]int, n)}
	for i := range s.place {
		s.place[i] = i
	}
	sort.SliceStable(s.place, func(i, j int) bool {
		return rows[s.place[i]].path().less(rows[s.place[j]].path())
	})

	s.mean = make([]float64, s.d)
	column := make([]float64, n)
	for c := 1; c < s.d; c++ {
		for k, i := range s.place {
			column[k] = rows[i].column(c)
		}
		s.mean[c] = centre(column)
	}
	s.a = make([]float64, n*s.d)
	for k, i := range s.place {
		s.a[k*s.d] = 1
		for c := 1; c < s.d; c++ {
			s.a[k*s.d+c] = rows[i].column(c) - s.mean[c]
		}
	}

	var last nestedPath
	for k, i := range s.place {
		at := rows[i].path()
		newOrder := k == 0 || at.order != last.order
		newFamily := newOrder || at.family != last.family
		newGenus := newFamily || at.genus != last.genus
		if newOrder {
			f := len(s.node[levelFamily])
			s.node[levelOrder] = append(s.node[levelOrder], nestedNode{from: f, to: f})
		}
		if newFamily {
			g := len(s.node[levelGenus])
			s.node[levelFamily] = append(s.node[levelFamily], nestedNode{from: g, to: g})
			s.node[levelOrder][len(s.node[levelOrder])-1].to++
		}
		if newGenus {
			s.node[levelGenus] = append(s.node[levelGenus], nestedNode{from: k, to: k})
			s.node[levelFamily][len(s.node[levelFamily])-1].to++
		}
		s.node[levelGenus][len(s.node[levelGenus])-1].to++
		for l := range s.node {
			s.node[l][len(s.node[l])-1].rows++
		}
		last = at
	}

	s.raw = make([]float64, len(s.node[levelGenus])*s.d)
	s.q = make([]float64, s.d*s.d)
	for g, genus := range s.node[levelGenus] {
		t := s.raw[g*s.d : (g+1)*s.d]
		for k := genus.from; k < genus.to; k++ {
			row := s.row(k)
			for i, v := range row {
				t[i] += v
				for j, w := range row {
					s.q[i*s.d+j] += v * w
				}
			}
		}
	}

	// Where every family has one genus the two variances act alike, and only
	// their sum shows; with a single order its intercept is the fixed one. The
	// coarser of two that coincide is held at zero: what cannot be told apart
	// is then not passed on to a species that shares only the coarser level.
	count := [levels + 1]int{levels: n}
	for l := range s.node {
		count[l] = len(s.node[l])
	}
	for l := range s.held {
		s.held[l] = count[l] == 1 || count[l] == count[l+1]
	}
	return s, nil
}

func (s *nestedSums) row(k int) []float64 { return s.a[k*s.d : (k+1)*s.d] }

// nestedState is everything that one value of θ gives.
type nestedState struct {
	theta  [levels]float64
	t      [levels][]float64 // A'W⁻¹1 of every node, its own intercept included
	div    [levels][]float64 // 1 + θs of every node
	beta   []float64         // of the centred design
	c      *mat.SymDense     // (X'V⁻¹X)⁻¹, in units of the residual variance
	sigma2 float64           // residual variance, RSS/(n−p)
	ll     float64           // restricted log-likelihood at its best σ²
}

var (
	errCollinear  = errors.New("the covariates are collinear")
	errNoResidual = errors.New("the rows leave no residual")
)

// up is the pass from the genera to the whole, ending in the restricted
// log-likelihood with σ² at its best value RSS/(n−p):
//
//	ℓ = −½·[(n−p)·(ln(2πσ²) + 1) + ln|V| + ln|X'V⁻¹X|]
func (s *nestedSums) up(theta [levels]float64, st *nestedState) error {
	st.theta = theta
	d, p := s.d, s.p
	for l := range st.t {
		if len(st.t[l]) == 0 {
			st.t[l] = make([]float64, len(s.node[l])*d)
			st.div[l] = make([]float64, len(s.node[l]))
		}
	}
	q := append(make([]float64, 0, d*d), s.q...)
	// ln|V| is the logarithm of a product: one logarithm serves many factors.
	logdet, product := 0.0, 1.0
	// include adds a node's own intercept to the sums t of its rows.
	include := func(l, k int, t []float64) {
		th := theta[l]
		div := 1 + th*t[0]
		st.div[l][k] = div
		if product *= div; product > 1e200 {
			logdet += math.Log(product)
			product = 1
		}
		if w := th / div; w != 0 {
			for i, v := range t {
				for j, u := range t[:i+1] {
					q[i*d+j] -= w * v * u
				}
			}
		}
		for i := range t {
			t[i] /= div
		}
	}
	copy(st.t[levelGenus], s.raw)
	for g := range s.node[levelGenus] {
		include(levelGenus, g, st.t[levelGenus][g*d:(g+1)*d])
	}
	for l := levelFamily; l >= levelOrder; l-- {
		below := st.t[l+1]
		for k, node := range s.node[l] {
			t := st.t[l][k*d : (k+1)*d]
			clear(t)
			for c := node.from; c < node.to; c++ {
				for i, v := range below[c*d : (c+1)*d] {
					t[i] += v
				}
			}
			include(l, k, t)
		}
	}

	logdet += math.Log(product)

	xx := mat.NewSymDense(p, nil)
	xy := mat.NewVecDense(p, nil)
	for i := 0; i < p; i++ {
		for j := 0; j <= i; j++ {
			xx.SetSym(i, j, q[i*d+j])
		}
		xy.SetVec(i, q[p*d+i])
	}
	var ch mat.Cholesky
	if !ch.Factorize(xx) || ch.Cond() > 1e13 {
		return errCollinear
	}
	b := mat.NewVecDense(p, nil)
	if err := ch.SolveVecTo(b, xy); err != nil {
		return errCollinear
	}
	rss := q[p*d+p] - mat.Dot(b, xy)
	if !(rss > 1e-14*s.q[p*d+p]) {
		return errNoResidual
	}
	st.c = mat.NewSymDense(p, nil)
	if err := ch.InverseTo(st.c); err != nil {
		return errCollinear
	}
	st.beta = b.RawVector().Data
	df := float64(s.n - p)
	st.sigma2 = rss / df
	st.ll = -0.5 * (df*(math.Log(2*math.Pi*st.sigma2)+1) + logdet + ch.LogDet())
	return nil
}

// nodeSums are the exact sums of one node over all rows of its order:
// a = A'V⁻¹1 of the node, and 1'V⁻¹1 of the node with itself and with the
// nodes above it.
type nodeSums struct {
	a                          []float64
	own, withFamily, withOrder float64
}

// down visits every node from the orders down with its sums. The slice is
// reused: visit must not keep it. Inside a node whose own
// intercept has been included, with t of that node and 1ᵢ some of its rows,
//
//	A'(W+θ11')⁻¹1ᵢ = A'W⁻¹1ᵢ − θ·(1'W⁻¹1ᵢ)·t
func (s *nestedSums) down(st *nestedState, visit func(l, order, family, genus int, sums nodeSums)) {
	d := s.d
	thO, thF := st.theta[levelOrder], st.theta[levelFamily]
	a := make([]float64, d)
	for o, order := range s.node[levelOrder] {
		to, divO := st.t[levelOrder][o*d:(o+1)*d], st.div[levelOrder][o]
		copy(a, to)
		visit(levelOrder, o, -1, -1, nodeSums{a: a, own: to[0], withFamily: to[0], withOrder: to[0]})
		for f := order.from; f < order.to; f++ {
			tf, divF := st.t[levelFamily][f*d:(f+1)*d], st.div[levelFamily][f]
			for i := range a {
				a[i] = tf[i] - thO*tf[0]*to[i]
			}
			own := tf[0] - thO*tf[0]*tf[0]/divO
			visit(levelFamily, o, f, -1, nodeSums{a: a, own: own, withFamily: own, withOrder: tf[0] / divO})
			family := s.node[levelFamily][f]
			for g := family.from; g < family.to; g++ {
				tg := st.t[levelGenus][g*d : (g+1)*d]
				m := tg[0] / divF // 1'W⁻¹1g over the family
				for i := range a {
					a[i] = tg[i] - thF*tg[0]*tf[i] - thO*m*to[i]
				}
				visit(levelGenus, o, f, g, nodeSums{
					a:          a,
					own:        tg[0] - thF*tg[0]*tg[0]/divF - thO*m*m/divO,
					withFamily: m - thO*tf[0]*m/divO,
					withOrder:  m / divO,
				})
			}
		}
	}
}

// eachRow visits every row, sorted, with a = A'V⁻¹eᵢ and v = (V⁻¹)ᵢᵢ.
func (s *nestedSums) eachRow(st *nestedState, visit func(k int, a []float64, v float64)) {
	d := s.d
	thO, thF, thG := st.theta[levelOrder], st.theta[levelFamily], st.theta[levelGenus]
	a := make([]float64, d)
	for o, order := range s.node[levelOrder] {
		to, divO := st.t[levelOrder][o*d:(o+1)*d], st.div[levelOrder][o]
		for f := order.from; f < order.to; f++ {
			tf, divF := st.t[levelFamily][f*d:(f+1)*d], st.div[levelFamily][f]
			for g := s.node[levelFamily][f].from; g < s.node[levelFamily][f].to; g++ {
				tg, divG := st.t[levelGenus][g*d:(g+1)*d], st.div[levelGenus][g]
				l := 1 / divG // 1'W⁻¹e over the genus
				m := l / divF // over the family
				v := 1 - thG/divG - thF*l*l/divF - thO*m*m/divO
				for k := s.node[levelGenus][g].from; k < s.node[levelGenus][g].to; k++ {
					row := s.row(k)
					for i := range a {
						a[i] = row[i] - thG*tg[i] - thF*l*tf[i] - thO*m*to[i]
					}
					visit(k, a, v)
				}
			}
		}
	}
}

// residualPart returns the last element of a minus β' of the others: with
// a = A'V⁻¹z it is z'V⁻¹(y − Xβ).
func (st *nestedState) residualPart(a []float64) float64 {
	r := a[len(a)-1]
	for i, b := range st.beta {
		r -= b * a[i]
	}
	return r
}

// quadratic returns x'(X'V⁻¹X)⁻¹x of the first p elements of x.
func (st *nestedState) quadratic(x []float64) float64 {
	var sum float64
	for i := range st.beta {
		for j := range st.beta {
			sum += x[i] * st.c.At(i, j) * x[j]
		}
	}
	return sum
}

// gradient writes dℓ/dθ after up, by the sums
//
//	−½·Σ(1'V⁻¹1 − (X'V⁻¹1)'(X'V⁻¹X)⁻¹(X'V⁻¹1) − (1'V⁻¹r)²/σ²)
//
// over the nodes of each level, r = y − Xβ.
func (s *nestedSums) gradient(st *nestedState) (grad [levels]float64) {
	s.down(st, func(l, _, _, _ int, sums nodeSums) {
		r := st.residualPart(sums.a)
		grad[l] -= 0.5 * (sums.own - st.quadratic(sums.a) - r*r/st.sigma2)
	})
	return grad
}
