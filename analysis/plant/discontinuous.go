package plant

func (s *Stage) solveDiscontinuous(c *Circuit, x *steady, out *Solution) error {
	out.Mode = Discontinuous
	return nil
}
