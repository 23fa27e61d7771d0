package decision

import (
	"fmt"

	"assaywrit/evidence/casefile"
)

// manual raises integrations set by hand, those on calibrators, controls and blanks by themselves, and asks that another person than
// the one who set them has approved each.
func (j *judge) manual() {
	var all, others, unapproved []string
	for i, inj := range j.rec.Injections {
		for k, m := range inj.Measurements {
			if m.Manual == nil {
				continue
			}
			at := fmt.Sprintf("/injections/%d/measurements/%d/manual", i, k)
			all = append(all, at)
			if inj.Role != casefile.SampleAliquot {
				others = append(others, at)
			}
			if !approved(m.Manual.By, m.Manual.ApprovedBy) {
				unapproved = append(unapproved, at)
			}
		}
	}
	for i, m := range j.rec.Case.Manual {
		if !approved(m.By, m.ApprovedBy) {
			unapproved = append(unapproved, fmt.Sprintf("/case/manual_integrations/%d", i))
		}
	}
	j.raise("manual-integration", "Integrations set by hand", "every integration set by hand is shown", all,
		"No peak was integrated by hand.", fmt.Sprintf("%s integrated by hand; the automatic results stand beside them.", were(len(all), "peak")))
	j.raise("manual-integration/controls", "Integrations set by hand on calibrators, controls and blanks", "integrations set by hand on calibrators and controls are raised", others,
		"No calibrator, control or blank was integrated by hand.", fmt.Sprintf("%s integrated by hand in calibrators, controls or blanks.", were(len(others), "peak")))
	j.direction()
	c := j.startCase("manual-integration/approved", "Integrations set by hand approved by another person", true, unapproved...).custom("a second person approves what is set by hand")
	if len(all)+len(j.rec.Case.Manual) == 0 {
		c.Evidence = []string{"/injections"}
		j.add(c.notApplicable("No peak was integrated by hand."))
		return
	}
	c = c.passIf(len(unapproved) == 0)
	if len(unapproved) == 0 {
		c.Evidence = all
	}
	j.add(c.says("Each integration set by hand was approved by another person.", fmt.Sprintf("%s integrated by hand without the approval of another person.", were(len(unapproved), "peak"))))
}

// oneWay is how many integrations set by hand, all changing areas the same way, are raised: by chance alone three of three are one case
// in four, five of five one in sixteen.
const oneWay = 3

// direction raises changes of area that all go one way: peaks of calibrators and controls made smaller, or larger, throughout. Such
// changes move the line, or the controls, to where they are wanted.
func (j *judge) direction() {
	var smaller, larger []string
	for i, inj := range j.rec.Injections {
		if inj.Role == casefile.SampleAliquot {
			continue
		}
		for k, m := range inj.Measurements {
			if m.Manual == nil || m.Manual.AreaChange == nil || *m.Manual.AreaChange == 0 {
				continue
			}
			at := fmt.Sprintf("/injections/%d/measurements/%d/manual/area_change", i, k)
			if *m.Manual.AreaChange < 0 {
				smaller = append(smaller, at)
			} else {
				larger = append(larger, at)
			}
		}
	}
	found, way := smaller, "smaller"
	if len(larger) > len(smaller) {
		found, way = larger, "larger"
	}
	if len(found) < oneWay || len(smaller) > 0 && len(larger) > 0 {
		found = nil
	}
	j.raise("manual-integration/direction", "Integrations set by hand that all go one way", "systematic shaving or enhancing of peaks is raised", found,
		"No three or more integrations set by hand on calibrators, controls or blanks change areas the same way without another that does not.",
		fmt.Sprintf("All %d integrations set by hand on calibrators, controls and blanks made the area %s.", len(found), way))
}

func approved(by, approver string) bool { return by != "" && approver != "" && by != approver }

func were(n int, what string) string {
	if n == 1 {
		return "1 " + what + " was"
	}
	return fmt.Sprintf("%d %ss were", n, what)
}

// raise adds an advisory check that fails where there is something to be seen.
func (j *judge) raise(name, title, clause string, found []string, none, some string) {
	c := j.startCase(name, title, false, found...).custom(clause).passIf(len(found) == 0)
	if len(found) == 0 {
		c.Evidence = []string{"/injections"}
	}
	j.add(c.says(none, some))
}
