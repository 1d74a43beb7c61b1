package main

import (
	"fmt"

	"github.com/spf13/cobra"

	"samecall/signal"
)

// curve is how an acceptance curve is to be fitted.
type curve struct {
	link             string
	twoSigmas, lapse bool
}

// addFlags gives a command the flags of a curve over two limits.
func (c *curve) addFlags(cmd *cobra.Command) {
	f := cmd.Flags()
	c.addLink(cmd)
	f.BoolVar(&c.twoSigmas, "two-sigmas", false, "a σ for each limit instead of one for both")
	f.BoolVar(&c.lapse, "lapse", false, "estimate the share of calls made at random too")
}

func (c *curve) addLink(cmd *cobra.Command) {
	addChoice(cmd, &c.link, "link", "probit", "shape of the curve: probit (normal) or logit (heavier tails)", "probit", "logit")
}

// options returns what signal is to do; confidence may be 0 for the usual one.
func (c *curve) options(confidence float64) (signal.Options, error) {
	o := signal.Options{TwoSigmas: c.twoSigmas, Lapse: c.lapse, Confidence: confidence}
	switch c.link {
	case "probit":
		o.Link = signal.Probit
	case "logit":
		o.Link = signal.Logit
	default:
		return o, fmt.Errorf("--link is %q; expected probit or logit", c.link)
	}
	return o, nil
}
