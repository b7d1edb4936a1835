"""The arm and the trunk that carries it: links, joints, postures, reach."""
