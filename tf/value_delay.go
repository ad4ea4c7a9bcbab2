package tf

import (
	"fmt"
	"math/big"

	"github.com/qofs/qofs/internal/fault"
)

func (q *complexQuotient) delayed(t *big.Rat, x, y float64) (complex128, error) {
	return 0, fmt.Errorf("tf: values with dead time are not available yet: %w", fault.ErrLimit)
}
