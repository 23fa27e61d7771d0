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
