// The public list of the numbers, by topic. Other rooms import from here and from nowhere deeper.

// series
// correlogram
// unitroot
// arma
// forecast
// diagnostics
// evaluation
// decompose
// distributions
