package intpoly

// Bounds for callers, in multiplications of words: some seconds each.
const (
	MaxGCDWork       = 1 << 34
	MaxCofactorWork  = 11 << 28
	MaxResultantWork = 1 << 32
)

// GCDWork estimates what the greatest common divisor of p and q takes at most, in
// multiplications of words.
func (p Poly) GCDWork(q Poly) float64 { return p.work(q, p.Span()+q.Span(), 1, p.terms()) }

// CofactorWork is the estimate for Cofactors, which are as long as the resultant.
func (p Poly) CofactorWork(q Poly) float64 {
	return p.work(q, p.resultantSpan(q), 8, p.terms()+q.terms())
}

// ResultantWork is the estimate for Resultant.
func (p Poly) ResultantWork(q Poly) float64 { return p.work(q, p.resultantSpan(q), 1, 4) }

// work counts as many primes as the bits of the result ask for, each with an image
// that costs some times the square of the degrees. Each prime then lengthens every
// term, at a cost that is the number of primes so far times some 4
// multiplications.
func (p Poly) work(q Poly, bits, image, terms int) float64 {
	n, primes := float64(p.terms()+q.terms()), float64(bits/61+1)
	return float64(image)*primes*n*n + 4*primes*primes*float64(max(terms, 1))
}

// resultantSpan bounds the length of the resultant.
func (p Poly) resultantSpan(q Poly) int {
	return p.terms()*(q.Span()+13) + q.terms()*(p.Span()+13)
}
