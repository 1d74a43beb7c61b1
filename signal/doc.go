// Package signal tells where the calls of a pass/fail inspection turn, how
// wide the band of doubt around each limit is, and what that costs.
//
// Parts have a measured value; each was accepted so many times out of so many
// calls. From these the package computes
//
//   - the unanimous zone at each limit (Unanimous),
//   - the acceptance curve P(accept | x) = F((x−m_L)/σ_L) − F((x−m_U)/σ_U) by
//     maximum likelihood (Fit, FitAppraisers), with profile-likelihood
//     intervals and likelihood-ratio tests,
//   - the short study at one limit (Short),
//   - detection indices and the area under the ROC curve (Detect, AreaUnderROC),
//   - what an inspection lets escape and rejects falsely in a given process
//     (Assess), and the guard band that holds it,
//   - whether a gauge's own calibrated sizes explain where it cuts (Explain),
//   - flaw sizes found half and nine tenths of the time (FitHitMiss).
//
// It is pure computation: nothing is printed, no file is read, and the same
// input gives the same result. A quantity that cannot be computed is absent
// with a reason; no result holds NaN or an infinity, but for the probability of
// acceptance at a value that is NaN (Curve.Accept, Gauge.Accept).
package signal
