package decision

import (
	"fmt"
	"strconv"
)

// gravity gives the factor by which specific gravity raises the limit, nil where the rule does not ask for one. Without a recorded
// specific gravity it cannot be known whether the limit stands as it is, and a required check fails.
func (b *batchJudge) gravity(rule *LimitRule) *float64 {
	if !rule.Gravity {
		return nil
	}
	g := b.set.Quantity.Gravity
	sg := b.rec.Case.Sample.SpecificGravity
	c := b.startLimit("specific-gravity", "Specific gravity", true, field("/case/sample", "specific_gravity", sg != nil)).cited(g.Cite)
	if sg == nil || !(*sg > 0) {
		b.add(c.missing("The specific gravity of the sample is not recorded, so that the limit that applies is not known."))
		return nil
	}
	factor := gravityFactor(*sg, g)
	c = c.passIf(true)
	c.Measured = &Figure{Value: *sg, Text: gravityFigure(*sg)}
	c.Sentence = fmt.Sprintf("The specific gravity is %s, which is not above %s: the limit stands as it is.", c.Measured.Text, Text(g.ApplyAbove, 6))
	if *sg > g.ApplyAbove {
		c.Sentence = fmt.Sprintf("The specific gravity is %s: the decision limit is raised by the factor %s.", c.Measured.Text, Text(factor, 6))
	}
	b.add(c)
	return &factor
}

// gravityFactor is (SG + add − 1)/(reference − 1) in exact decimals, and never below 1: a limit is never lowered.
func gravityFactor(sg float64, g *SpecificGravityRule) float64 {
	if sg <= g.ApplyAbove {
		return 1
	}
	num := decimal(sg)
	num.Add(num, decimal(g.Add)).Sub(num, decimal(1))
	den := decimal(g.Reference)
	den.Sub(den, decimal(1))
	f, _ := num.Quo(num, den).Float64()
	return max(1, f)
}

func gravityText(g *SpecificGravityRule) string {
	return fmt.Sprintf("above a specific gravity of %g the limit is multiplied by (SG + %g − 1)/(%g − 1)", g.ApplyAbove, g.Add, g.Reference)
}

// gravityFigure writes a specific gravity with three decimals, or more where it was measured finer.
func gravityFigure(sg float64) string {
	if text := strconv.FormatFloat(sg, 'f', -1, 64); len(text) > len("1.000") {
		return text
	}
	return fixed(sg, 3)
}
