package plant

func (s *Stage) generalModel(c *Circuit, x *steady, out *Solution) error { return errSingular }
