"""The parts of supervised work: the wire between worker and parent, the worker, the guard, the endings."""
