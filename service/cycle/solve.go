package cycle

// Solve computes the cycle that r describes. It returns a [*RefusedError] for a request that cannot be.
func Solve(r *Request) (*Solution, error) { panic("stub") }
