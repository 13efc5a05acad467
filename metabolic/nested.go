package metabolic

import (
	"fmt"
	"math"
	"slices"

	"gonum.org/v1/gonum/floats"
	"gonum.org/v1/gonum/mat"
	"gonum.org/v1/gonum/optimize"
)

// A NestedRow is one measured species.
type NestedRow struct {
	Order, Family, Genus string    // none of them empty
	Covariates           []float64 // without the intercept, for example ln mass and temperature
	Y                    float64   // for example ln rate
}

// column returns column c of [1 X y].
func (r NestedRow) column(c int) float64 {
	if c <= len(r.Covariates) {
		return r.Covariates[c-1]
	}
	return r.Y
}

func (r NestedRow) path() nestedPath { return nestedPath{r.Order, r.Family, r.Genus} }

// nestedPath is a place in the tree: genus, or genus and family, may be empty.
type nestedPath struct{ order, family, genus string }

func (a nestedPath) compare(b nestedPath) int {
	switch {
	case a.order != b.order:
		return compareText(a.order, b.order)
	case a.family != b.family:
		return compareText(a.family, b.family)
	default:
		return compareText(a.genus, b.genus)
	}
}

func (a nestedPath) less(b nestedPath) bool { return a.compare(b) < 0 }

func compareText(a, b string) int {
	if a < b {
		return -1
	}
	if a > b {
		return 1
	}
	return 0
}

// A NestedFit is a linear mixed model with random intercepts of genus within
// family within order,
//
//	y = β₀ + Σβⱼxⱼ + (order) + (family) + (genus) + residual
//
// fitted by restricted maximum likelihood. In R it is
//
//	nlme::lme(y ~ x, random = ~1|order/family/genus, method = "REML")
//
// A genus of one name in two families counts as two. The struct holds all that
// Predict needs in exported fields, a few numbers a node, and survives JSON
// unchanged; the rows and their covariance matrix are not needed again.
//
// Source: Laird & Ware 1982, Biometrics 38:963-974, for the model; Patterson &
// Thompson 1971, Biometrika 58:545-554, for the likelihood (both from memory).
// The tests hold every figure against R.
//
// It is made by FitNested.
type NestedFit struct {
	// N counts rows; the others count distinct orders, families within them and
	// genera within those.
	N, Orders, Families, Genera int

	// Beta holds the fixed effects, the intercept first, then one a covariate;
	// CovBeta is their covariance (X'V⁻¹X)⁻¹ at the estimated variances.
	Beta    []float64
	CovBeta [][]float64

	VarOrder, VarFamily, VarGenus, VarResidual float64
	// Held names the levels whose variance these rows cannot tell from another
	// (every family has one genus, or there is one order): it is kept at zero.
	Held []string

	// LogLikREML is the restricted log-likelihood, with the constant as R's
	// logLik prints it.
	LogLikREML float64

	// Nodes are the measured orders, families and genera, sorted by path.
	Nodes []NestedNode
}

// A NestedNode is one measured order (Family and Genus empty), family (Genus
// empty) or genus.
//
// For a new species whose closest measured kin are this node, c is the
// covariance of its value with the rows: the variances of this node's level and
// of those above it, each on the rows of that node. With c go three exact
// quantities, in which the whole table is summed up:
//
//	Shared    = c'V⁻¹(y − Xβ)   the sum of the BLUPs of this node and those above it
//	Explained = c'V⁻¹c          the variance that the kin explain
//	Loading   = X'V⁻¹c          the part of the fixed effects that the kin carry
type NestedNode struct {
	Order, Family, Genus string
	N                    int     // rows in it
	BLUP                 float64 // of this node's own intercept
	Shared, Explained    float64
	Loading              []float64
}

func (a NestedNode) path() nestedPath { return nestedPath{a.Order, a.Family, a.Genus} }

// levelNames are the names of the levels as Held and NestedPrediction give
// them, from the coarsest.
var levelNames = [levels]string{"order", "family", "genus"}

// FitNested fits the model to rows, which may come in any order and are not
// kept. All rows have the same number of covariates; there are at least two
// rows more than fixed effects. It returns an error that wraps ErrTooFewPoints,
// ErrBadValue (a value not finite, a level without a name) or says that the
// covariates are collinear or the rows leave no residual.
//
// The three variance ratios θ = σ²level/σ²residual are found by a quasi-Newton
// search from several starts on x with θ = x², so that a variance of zero is an
// inner point of the search and not a wall; the gradient is exact. β and the
// residual variance have closed forms at each θ.
func FitNested(rows []NestedRow) (*NestedFit, error) {
	s, err := newNestedSums(rows)
	if err != nil {
		return nil, err
	}
	st, err := s.maximise()
	if err != nil {
		return nil, fmt.Errorf("nested fit: %w", err)
	}
	return s.fit(rows, st), nil
}

// nestedStarts are the θ where the search begins; the best end is kept. The
// likelihood of a small table can have several hills, often one on which a
// single level explains what another hill shares out between two.
var nestedStarts = [][levels]float64{{0.5, 0.5, 0.5}, {1, 0.01, 0.01}, {0.01, 1, 0.01}, {0.01, 0.01, 1}}

func (s *nestedSums) maximise() (*nestedState, error) {
	var free []int
	for l, held := range s.held {
		if !held {
			free = append(free, l)
		}
	}
	spread := func(x []float64) (theta [levels]float64) {
		for i, l := range free {
			theta[l] = x[i] * x[i]
		}
		return theta
	}
	st := &nestedState{}
	if err := s.up([levels]float64{}, st); err != nil || len(free) == 0 {
		return st, err
	}

	best, bestLL := []float64(nil), math.Inf(-1)
	// The search asks for the value and then the slope at the same place.
	lastErr := error(nil)
	move := func(x []float64) error {
		if theta := spread(x); theta != st.theta {
			lastErr = s.up(theta, st)
		}
		return lastErr
	}
	value := func(x []float64) float64 {
		if move(x) != nil {
			return math.Inf(1)
		}
		return -st.ll
	}
	slope := func(grad, x []float64) {
		if move(x) != nil {
			for i := range grad {
				grad[i] = math.NaN()
			}
			return
		}
		g := s.gradient(st)
		for i, l := range free {
			grad[i] = -2 * x[i] * g[l]
		}
	}
	problem := optimize.Problem{Func: value, Grad: slope}
	settings := &optimize.Settings{GradientThreshold: 1e-9, MajorIterations: 500, Converger: optimize.NeverTerminate{}}
	search := func(x []float64) bool {
		// An error here is a line search that found no lower value at the last
		// digits: the point reached is judged by its likelihood.
		r, _ := optimize.Minimize(problem, x, settings, &optimize.BFGS{})
		if r == nil || !(-r.F > bestLL) {
			return false
		}
		best, bestLL = slices.Clone(r.X), -r.F
		return true
	}
	for _, start := range nestedStarts {
		x := make([]float64, len(free))
		for i, l := range free {
			x[i] = math.Sqrt(start[l])
		}
		search(x)
	}
	// At x = 0 the slope on x is zero whatever that on θ: a search that stepped
	// on it stays. It is sent off again where a positive θ would be likelier.
	for trapped := best != nil; trapped; {
		trapped = false
		if err := move(best); err != nil {
			return nil, err
		}
		off := slices.Clone(best)
		g := s.gradient(st)
		for i, l := range free {
			if st.theta[l] < 1e-8 && g[l] > 1e-4 {
				off[i], trapped = 0.3, true
			}
		}
		trapped = trapped && search(off)
	}
	if best == nil {
		return nil, fmt.Errorf("the search for the variances found no point")
	}
	polish(best, slope)
	for i, v := range best {
		if v*v < 1e-12 { // zero but for rounding
			best[i] = 0
		}
	}
	if err := move(best); err != nil {
		return nil, err
	}
	// Where the levels explain every row the likelihood has no top: the ratios
	// grow until the digits run out.
	if slices.Max(st.theta[:]) > 1e8 {
		return nil, errNoResidual
	}
	return st, nil
}

// polish takes a few Newton steps on the gradient from x, near a minimum. The
// likelihood changes in its twelfth digit where a variance still changes in its
// sixth, so that a search that compares likelihoods stops short; the gradient
// carries on. A step that does not make the gradient smaller is not taken.
func polish(x []float64, slope func(grad, x []float64)) {
	n := len(x)
	grad, side, try := make([]float64, n), make([]float64, n), make([]float64, n)
	hessian := mat.NewDense(n, n, nil)
	slope(grad, x)
	for range 8 {
		for j := range x {
			h := 1e-5 * (1 + math.Abs(x[j]))
			for _, sign := range []float64{1, -1} {
				copy(try, x)
				try[j] += sign * h
				slope(side, try)
				for i := range side {
					if sign > 0 {
						hessian.Set(i, j, side[i]/(2*h))
					} else {
						hessian.Set(i, j, hessian.At(i, j)-side[i]/(2*h))
					}
				}
			}
		}
		var step mat.VecDense
		if err := step.SolveVec(hessian, mat.NewVecDense(n, slices.Clone(grad))); err != nil {
			return
		}
		for i := range try {
			try[i] = x[i] - step.AtVec(i)
		}
		slope(side, try)
		if !(floats.Norm(side, 2) < floats.Norm(grad, 2)) {
			return
		}
		copy(x, try)
		copy(grad, side)
	}
}

// fit turns sums and state into the stored form.
func (s *nestedSums) fit(rows []NestedRow, st *nestedState) *NestedFit {
	f := &NestedFit{
		N: s.n, Orders: len(s.node[levelOrder]), Families: len(s.node[levelFamily]), Genera: len(s.node[levelGenus]),
		VarOrder:    st.theta[levelOrder] * st.sigma2,
		VarFamily:   st.theta[levelFamily] * st.sigma2,
		VarGenus:    st.theta[levelGenus] * st.sigma2,
		VarResidual: st.sigma2,
		LogLikREML:  st.ll,
	}
	for l, held := range s.held {
		if held {
			f.Held = append(f.Held, levelNames[l])
		}
	}
	f.Beta, f.CovBeta = s.uncentred(st)

	first := func(l, k int) NestedRow { // the first row of a node
		for ; l < levelGenus; l++ {
			k = s.node[l][k].from
		}
		return rows[s.place[s.node[levelGenus][k].from]]
	}
	var current [levels]NestedNode // the path down to the node at hand
	s.down(st, func(l, order, family, genus int, sums nodeSums) {
		k := [levels]int{order, family, genus}[l]
		row := first(l, k)
		node := NestedNode{Order: row.Order, N: s.node[l][k].rows}
		if l >= levelFamily {
			node.Family = row.Family
		}
		if l >= levelGenus {
			node.Genus = row.Genus
		}
		th := st.theta
		node.BLUP = th[l] * st.residualPart(sums.a)
		node.Shared = node.BLUP
		// In units of σ², c = Σθ1 over the path, so c'V⁻¹c is the parent's plus
		// the new node's square and its products with the nodes above.
		explained := th[l] * th[l] * sums.own
		switch l {
		case levelFamily:
			explained += 2 * th[l] * th[levelOrder] * sums.withOrder
		case levelGenus:
			explained += 2 * th[l] * (th[levelOrder]*sums.withOrder + th[levelFamily]*sums.withFamily)
		}
		node.Explained = st.sigma2 * explained
		// X'V⁻¹c has no σ²: it cancels. Columns go back to uncentred covariates.
		node.Loading = make([]float64, s.p)
		for i := range node.Loading {
			node.Loading[i] = th[l] * (sums.a[i] + s.mean[i]*sums.a[0])
		}
		if l > levelOrder {
			up := current[l-1]
			node.Shared += up.Shared
			node.Explained += up.Explained
			for i, v := range up.Loading {
				node.Loading[i] += v
			}
		}
		current[l] = node
		f.Nodes = append(f.Nodes, node)
	})
	return f
}

// uncentred returns β and its covariance for the covariates as they were given:
// the intercept moves to x = 0.
func (s *nestedSums) uncentred(st *nestedState) (beta []float64, cov [][]float64) {
	beta = slices.Clone(st.beta)
	beta[0] += s.mean[s.p]
	for j := 1; j < s.p; j++ {
		beta[0] -= st.beta[j] * s.mean[j]
	}
	// L·C·L' with the first row of L being (1, −means).
	lower := func(i, k int) float64 {
		if i == 0 && k > 0 {
			return -s.mean[k]
		}
		if i == k {
			return 1
		}
		return 0
	}
	cov = make([][]float64, s.p)
	for i := range cov {
		cov[i] = make([]float64, s.p)
		for j := range cov[i] {
			for k := 0; k < s.p; k++ {
				for m := 0; m < s.p; m++ {
					cov[i][j] += lower(i, k) * st.c.At(k, m) * lower(j, m)
				}
			}
			cov[i][j] *= st.sigma2
		}
	}
	return beta, cov
}
